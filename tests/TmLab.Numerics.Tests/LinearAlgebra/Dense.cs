using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Statistics;

namespace TmLab.Numerics.Tests.LinearAlgebra;

/// <summary>Plain loops on small dense matrices: the second opinion on every engine.</summary>
internal static class Dense
{
    public static Complex[,] Random(int rows, int columns, ulong seed)
    {
        var matrix = new Complex[rows, columns];
        for (int row = 0; row < rows; row++)
        {
            var random = new SeededRandom(seed, (ulong)row);
            for (int column = 0; column < columns; column++)
            {
                // Exactly representable in single precision, so that both precisions see the same matrix.
                matrix[row, column] = (Complex64)random.NextComplexNormal();
            }
        }

        return matrix;
    }

    /// <summary>Haar × diagonal × Haar: a matrix whose singular values are known.</summary>
    public static Complex[,] WithSpectrum(int rows, double[] values, ulong seed)
    {
        using Complex128Matrix u = RandomMatrices.HaarUnitary(rows, values.Length, seed);
        using Complex128Matrix v = RandomMatrices.HaarUnitary(values.Length, values.Length, seed + 1);
        var matrix = new Complex[rows, values.Length];
        for (int row = 0; row < rows; row++)
        {
            for (int column = 0; column < values.Length; column++)
            {
                for (int k = 0; k < values.Length; k++)
                {
                    matrix[row, column] += u[row, k] * values[k] * Complex.Conjugate(v[column, k]);
                }
            }
        }

        return matrix;
    }

    public static Complex[,] Product(Complex[,] a, Complex[,] b)
    {
        var c = new Complex[a.GetLength(0), b.GetLength(1)];
        for (int i = 0; i < c.GetLength(0); i++)
        {
            for (int k = 0; k < b.GetLength(0); k++)
            {
                for (int j = 0; j < c.GetLength(1); j++)
                {
                    c[i, j] += a[i, k] * b[k, j];
                }
            }
        }

        return c;
    }

    public static Complex[,] Adjoint(Complex[,] a)
    {
        var b = new Complex[a.GetLength(1), a.GetLength(0)];
        for (int i = 0; i < b.GetLength(0); i++)
        {
            for (int j = 0; j < b.GetLength(1); j++)
            {
                b[i, j] = Complex.Conjugate(a[j, i]);
            }
        }

        return b;
    }

    public static double LargestDifference(Complex[,] a, Complex[,] b)
    {
        double largest = 0;
        for (int i = 0; i < a.GetLength(0); i++)
        {
            for (int j = 0; j < a.GetLength(1); j++)
            {
                largest = Math.Max(largest, (a[i, j] - b[i, j]).Magnitude);
            }
        }

        return largest;
    }

    public static Complex128Matrix Wide(Complex[,] a, int extraRows = 0)
    {
        var matrix = new Complex128Matrix(a.GetLength(0) + extraRows, a.GetLength(1));
        for (int i = 0; i < a.GetLength(0); i++)
        {
            for (int j = 0; j < a.GetLength(1); j++)
            {
                matrix[i, j] = a[i, j];
            }
        }

        return matrix;
    }

    public static NativeBuffer<Complex64> Single(Complex[,] a)
    {
        var buffer = new NativeBuffer<Complex64>(a.Length);
        int k = 0;
        foreach (Complex value in a)
        {
            buffer.AsSpan()[k++] = (Complex64)value;
        }

        return buffer;
    }

    public static Complex[,] From(Complex128Matrix matrix)
    {
        var a = new Complex[matrix.Rows, matrix.Columns];
        for (int i = 0; i < matrix.Rows; i++)
        {
            for (int j = 0; j < matrix.Columns; j++)
            {
                a[i, j] = matrix[i, j];
            }
        }

        return a;
    }

    public static Complex[,] From(NativeBuffer<Complex64> buffer, int rows, int columns)
    {
        var a = new Complex[rows, columns];
        for (int k = 0; k < rows * columns; k++)
        {
            a[k / columns, k % columns] = buffer.AsSpan()[k];
        }

        return a;
    }

    public static Complex[,] Diagonal(IReadOnlyList<double> values)
    {
        var a = new Complex[values.Count, values.Count];
        for (int k = 0; k < values.Count; k++)
        {
            a[k, k] = values[k];
        }

        return a;
    }

    public static Complex[,] Identity(int size) => Diagonal([.. Enumerable.Repeat(1.0, size)]);

    public static TestKit.InMemoryMatrix Reader(Complex[,] a)
    {
        var matrix = new TestKit.InMemoryMatrix(a.GetLength(0), a.GetLength(1));
        for (int i = 0; i < a.GetLength(0); i++)
        {
            for (int j = 0; j < a.GetLength(1); j++)
            {
                matrix.Row(i)[j] = (Complex64)a[i, j];
            }
        }

        return matrix;
    }
}
