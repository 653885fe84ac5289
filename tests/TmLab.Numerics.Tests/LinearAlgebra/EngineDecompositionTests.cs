using System.Numerics;
using MathNet.Numerics.LinearAlgebra;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.LinearAlgebra.Native;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

/// <summary>
/// Decompositions of both engines: they reproduce the matrix, their factors are orthonormal, and they agree with MathNet.
/// Backward-stable routines err by a modest multiple of n u ‖A‖; 50 n u is the bound used.
/// </summary>
public sealed class EngineDecompositionTests
{
    private const double Roundoff = 1.2e-16;

    public static TheoryData<EngineChoice, int> Sizes
    {
        get
        {
            var data = new TheoryData<EngineChoice, int>();
            foreach (EngineChoice choice in (EngineChoice[])[EngineChoice.Managed, EngineChoice.Native])
            {
                data.AddRange([.. ((int[])[1, 2, 3, 4, 5, 8, 17, 33, 64, 130]).Select(n => new TheoryDataRow<EngineChoice, int>(choice, n))]);
            }

            return data;
        }
    }

    [Theory]
    [MemberData(nameof(Sizes))]
    public void Hermitian_eigenpairs_reproduce_the_matrix(EngineChoice choice, int size)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] g = Hermitian(size, 21);
        foreach (int count in (HashSet<int>)[1, (size + 2) / 3, size])
        {
            using Complex128Matrix work = Dense.Wide(g);
            using HermitianEigen eigen = engine.HermitianEigenvectors(work, count);
            Complex[,] adjoint = Dense.From(eigen.VectorsAdjoint), v = Dense.Adjoint(adjoint);
            double bound = 50 * size * Roundoff * Norm(g);
            Assert.Equal(eigen.Values.OrderDescending(), eigen.Values);
            Assert.True(Dense.LargestDifference(Dense.Identity(count), Dense.Product(adjoint, v)) <= 50 * size * Roundoff);
            double residual = Dense.LargestDifference(Dense.Product(g, v), Dense.Product(v, Dense.Diagonal(eigen.Values)));
            Assert.True(residual <= bound, $"{count} of {size}: {residual} > {bound}");
        }
    }

    [Theory]
    [MemberData(nameof(Sizes))]
    public void Hermitian_eigenvalues_are_those_of_MathNet(EngineChoice choice, int size)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] g = Hermitian(size, 22);
        using Complex128Matrix work = Dense.Wide(g);
        double[] found = engine.HermitianEigenvalues(work);
        double[] expected = [.. Matrix<Complex>.Build.DenseOfArray(g).Evd(Symmetricity.Hermitian).EigenValues.Select(z => z.Real).OrderDescending()];
        AssertNear(expected, found, 50 * size * Roundoff * Norm(g));
    }

    [Theory]
    [InlineData(EngineChoice.Managed)]
    [InlineData(EngineChoice.Native)]
    public void Special_Hermitian_matrices_are_solved(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        using var zero = new Complex128Matrix(5, 5);
        Assert.All(engine.HermitianEigenvalues(zero), value => Assert.Equal(0, value));
        using Complex128Matrix diagonal = Dense.Wide(Dense.Diagonal([3, -1, 7, 7, 0]));
        AssertNear([7, 7, 3, 0, -1], engine.HermitianEigenvalues(diagonal), 1e-14);

        // All ones: one value n, the others zero.
        var ones = new Complex[6, 6];
        for (int k = 0; k < 36; k++)
        {
            ones[k / 6, k % 6] = 1;
        }

        using Complex128Matrix rankOne = Dense.Wide(ones);
        using HermitianEigen eigen = engine.HermitianEigenvectors(rankOne, 6);
        AssertNear([6, 0, 0, 0, 0, 0], [.. eigen.Values], 1e-13);
    }

    [Theory]
    [MemberData(nameof(Sizes))]
    public void Thin_decompositions_reproduce_the_matrix(EngineChoice choice, int size)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        foreach (int rows in (HashSet<int>)[size, size + 7, Math.Max(1, size / 2)])
        {
            Complex[,] a = Dense.Random(rows, size, 23);
            using Complex128Matrix work = Dense.Wide(a);
            using ThinSvd svd = engine.ThinSvd(work);
            Complex[,] u = Dense.From(svd.U), adjoint = Dense.From(svd.VectorsAdjoint);
            Complex[,] product = Dense.Product(Dense.Product(u, Dense.Diagonal(svd.Values)), adjoint);
            int least = Math.Min(rows, size);
            double bound = 50 * (rows + size) * Roundoff;
            Assert.Equal(least, svd.Values.Length);
            Assert.Equal(svd.Values.OrderDescending(), svd.Values);
            Assert.True(Dense.LargestDifference(a, product) <= bound * svd.Values[0]);
            Assert.True(Dense.LargestDifference(Dense.Identity(least), Dense.Product(Dense.Adjoint(u), u)) <= bound);
            Assert.True(Dense.LargestDifference(Dense.Identity(least), Dense.Product(adjoint, Dense.Adjoint(adjoint))) <= bound);
        }
    }

    [Theory]
    [MemberData(nameof(Sizes))]
    public void Singular_values_are_those_of_MathNet(EngineChoice choice, int size)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] a = Dense.Random(size + 3, size, 24);
        using Complex128Matrix work = Dense.Wide(a);
        double[] expected = [.. Matrix<Complex>.Build.DenseOfArray(a).Svd(false).S.Select(z => z.Real).OrderDescending()];
        AssertNear(expected, engine.SingularValues(work), 50 * size * Roundoff * expected[0]);
    }

    [Theory]
    [InlineData(EngineChoice.Managed)]
    [InlineData(EngineChoice.Native)]
    public void Rank_deficient_matrices_keep_orthonormal_factors(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] a = Dense.WithSpectrum(9, [3, 2, 1, 0, 0], 25);
        foreach (Complex[,] matrix in (Complex[][,])[a, Dense.Adjoint(a)])
        {
            using Complex128Matrix work = Dense.Wide(matrix);
            using ThinSvd svd = engine.ThinSvd(work);
            Complex[,] u = Dense.From(svd.U), adjoint = Dense.From(svd.VectorsAdjoint);
            AssertNear([3, 2, 1, 0, 0], [.. svd.Values], 1e-14);
            Assert.True(Dense.LargestDifference(Dense.Identity(5), Dense.Product(Dense.Adjoint(u), u)) <= 1e-13);
            Assert.True(Dense.LargestDifference(Dense.Identity(5), Dense.Product(adjoint, Dense.Adjoint(adjoint))) <= 1e-13);
        }
    }

    [Theory]
    [MemberData(nameof(Sizes))]
    public void Triangular_factors_have_the_Gram_matrix_of_the_whole(EngineChoice choice, int size)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        foreach (int rows in (HashSet<int>)[size, (2 * size) + 5, Math.Max(1, size / 2)])
        {
            Complex[,] a = Dense.Random(rows, size, 26);
            using Complex128Matrix work = Dense.Wide(a, extraRows: 3);
            engine.TriangularFactor(work, rows);
            int least = Math.Min(rows, size);
            var r = new Complex[least, size];
            for (int i = 0; i < least; i++)
            {
                for (int j = 0; j < size; j++)
                {
                    r[i, j] = work[i, j];
                    Assert.True(j >= i || r[i, j] == Complex.Zero);
                }
            }

            Complex[,] expected = Dense.Product(Dense.Adjoint(a), a);
            double difference = Dense.LargestDifference(expected, Dense.Product(Dense.Adjoint(r), r));
            Assert.True(difference <= 50 * (rows + size) * Roundoff * Norm(expected), $"{rows} × {size}: {difference}");
        }
    }

    [Fact]
    public void The_native_fallback_for_singular_values_agrees_with_the_first_choice()
    {
        var engine = (NativeEngine)Engines.Get(EngineChoice.Native);
        Complex[,] a = Dense.Random(40, 23, 27);
        using Complex128Matrix first = Dense.Wide(a), second = Dense.Wide(a);
        double[] expected = engine.SingularValues(first);
        AssertNear(expected, engine.SingularValuesByImplicitQr(second), 50 * 40 * Roundoff * expected[0]);
    }

    private static Complex[,] Hermitian(int size, ulong seed)
    {
        Complex[,] a = Dense.Random(size, size, seed), adjoint = Dense.Adjoint(a);
        for (int i = 0; i < size; i++)
        {
            for (int j = 0; j < size; j++)
            {
                a[i, j] += adjoint[i, j];
            }
        }

        return a;
    }

    private static double Norm(Complex[,] a) => Math.Sqrt(a.Cast<Complex>().Sum(z => z.Magnitude * z.Magnitude));

    private static void AssertNear(double[] expected, double[] found, double tolerance)
    {
        Assert.Equal(expected.Length, found.Length);
        for (int k = 0; k < expected.Length; k++)
        {
            Assert.True(Math.Abs(expected[k] - found[k]) <= tolerance, $"{k}: expected {expected[k]}, found {found[k]}, tolerance {tolerance}");
        }
    }
}
