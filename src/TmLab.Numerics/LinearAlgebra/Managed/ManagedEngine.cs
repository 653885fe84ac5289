using System.Globalization;
using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// The engine written in C#, which needs nothing but .NET. Its own loops, because MathNet's managed provider takes 10 s for the
/// singular values of a 512 × 512 matrix and 1 s for the eigenvalues of one; MathNet serves as the tests' second opinion.
/// </summary>
internal sealed unsafe class ManagedEngine : ILinearAlgebraEngine
{
    public string Name => "managed";

    public string Description => string.Create(CultureInfo.InvariantCulture, $"managed: built-in C#, {Threads} threads");

    public int Threads => Environment.ProcessorCount;

    public void AddGram(NativeBuffer<Complex64> tile, int rows, Complex128Matrix gram)
    {
        GramSum.Check(tile, rows, gram);
        int n = gram.Columns;
        var adjoint = new ComplexProductKernel<float, double>.Operand((nint)tile.Pointer, n, Adjoint: true);
        ComplexProductKernel<float, double>.Accumulate(
            adjoint, (float*)tile.Pointer, (double*)gram.Buffer.Pointer, new ProductShape(n, n, rows), upperOnly: true);
    }

    public void AddGram(Complex128Matrix tile, int rows, Complex128Matrix gram)
    {
        GramSum.Check(tile, rows, gram);
        int n = gram.Columns;
        var adjoint = new ComplexProductKernel<double, double>.Operand((nint)tile.Buffer.Pointer, n, Adjoint: true);
        ComplexProductKernel<double, double>.Accumulate(
            adjoint, (double*)tile.Buffer.Pointer, (double*)gram.Buffer.Pointer, new ProductShape(n, n, rows), upperOnly: true);
    }

    public void Multiply(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape) =>
        Product(a, b, c, shape, new ComplexProductKernel<float, float>.Operand((nint)a.Pointer, shape.K, Adjoint: false));

    public void MultiplyAdjoint(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape) =>
        Product(a, b, c, shape, new ComplexProductKernel<float, float>.Operand((nint)a.Pointer, shape.M, Adjoint: true));

    public double[] HermitianEigenvalues(Complex128Matrix matrix)
    {
        Preconditions.SameLength(matrix.Rows, matrix.Columns);
        using SplitMatrix split = SplitMatrix.FromUpper(matrix);
        HermitianTridiagonal reduced = HermitianTridiagonal.Reduce(split);
        TridiagonalQl.Solve(reduced.Diagonal, reduced.OffDiagonal, null);
        return [.. reduced.Diagonal.OrderDescending()];
    }

    public HermitianEigen HermitianEigenvectors(Complex128Matrix matrix, int count)
    {
        Preconditions.SameLength(matrix.Rows, matrix.Columns);
        Preconditions.InRange(count, 0, matrix.Rows);
        using SplitMatrix split = SplitMatrix.FromUpper(matrix);
        HermitianTridiagonal reduced = HermitianTridiagonal.Reduce(split);
        using SplitMatrix vectors = Identity(matrix.Rows);
        TridiagonalQl.Solve(reduced.Diagonal, reduced.OffDiagonal, vectors);
        int[] order = DescendingOrder(reduced.Diagonal);
        var adjoint = new Complex128Matrix(count, matrix.Columns);
        Parallel.For(0, count, j =>
        {
            Span<double> real = vectors.Real(order[j]), imaginary = vectors.Imaginary(order[j]);
            reduced.ApplyQ(real, imaginary);
            Join(real, imaginary, adjoint.Row(j), conjugate: true);
        });
        return new HermitianEigen([.. order.Take(count).Select(j => reduced.Diagonal[j])], adjoint);
    }

    public double[] SingularValues(Complex128Matrix matrix)
    {
        using SplitMatrix rows = matrix.Rows > matrix.Columns ? SplitMatrix.FromAdjoint(matrix) : SplitMatrix.From(matrix);
        return [.. JacobiSvd.Solve(rows, null).OrderDescending()];
    }

    public ThinSvd ThinSvd(Complex128Matrix matrix)
    {
        // Of the matrix or its adjoint, the one with fewer rows: J B = Σ W†. For B = A: U = J†, V† = W†; for B = A†: V = J†, U = W.
        bool tall = matrix.Rows > matrix.Columns;
        using SplitMatrix rows = tall ? SplitMatrix.FromAdjoint(matrix) : SplitMatrix.From(matrix);
        using SplitMatrix rotations = Identity(rows.Rows);
        double[] norms = JacobiSvd.Solve(rows, rotations);
        int[] order = DescendingOrder(norms);
        using Complex128Matrix left = Rows(rotations, order, null);
        using Complex128Matrix right = Rows(rows, order, norms);
        double[] values = [.. order.Select(j => norms[j])];
        OrthonormalRows.Complete(right, values);
        return tall
            ? new ThinSvd(OrthonormalRows.Adjoint(right), [.. values], left.Copy())
            : new ThinSvd(OrthonormalRows.Adjoint(left), [.. values], right.Copy());
    }

    public void TriangularFactor(Complex128Matrix matrix, int rows)
    {
        Preconditions.InRange(rows, 0, matrix.Rows);
        HouseholderTriangle.Reduce(matrix, rows);
    }

    private static void Product(
        NativeBuffer<Complex64> a,
        NativeBuffer<Complex64> b,
        NativeBuffer<Complex64> c,
        ProductShape shape,
        ComplexProductKernel<float, float>.Operand operand)
    {
        ProductCheck.Buffers(a, b, c, shape);
        for (int row = 0; row < shape.M; row++)
        {
            c.Slice((long)row * shape.N, shape.N).Clear();
        }

        ComplexProductKernel<float, float>.Accumulate(operand, (float*)b.Pointer, (float*)c.Pointer, shape, upperOnly: false);
    }

    private static SplitMatrix Identity(int size)
    {
        var identity = new SplitMatrix(size, size);
        for (int k = 0; k < size; k++)
        {
            identity.Real(k)[k] = 1;
        }

        return identity;
    }

    private static int[] DescendingOrder(double[] values) => [.. Enumerable.Range(0, values.Length).OrderByDescending(j => values[j])];

    private static Complex128Matrix Rows(SplitMatrix from, int[] order, double[]? norms)
    {
        var rows = new Complex128Matrix(order.Length, from.Columns);
        for (int j = 0; j < order.Length; j++)
        {
            Join(from.Real(order[j]), from.Imaginary(order[j]), rows.Row(j), conjugate: false);
            double scale = norms is null || norms[order[j]] == 0 ? 1 : 1 / norms[order[j]];
            foreach (ref Complex element in rows.Row(j))
            {
                element *= scale;
            }
        }

        return rows;
    }

    private static void Join(ReadOnlySpan<double> real, ReadOnlySpan<double> imaginary, Span<Complex> to, bool conjugate)
    {
        for (int k = 0; k < to.Length; k++)
        {
            to[k] = new Complex(real[k], conjugate ? -imaginary[k] : imaginary[k]);
        }
    }
}
