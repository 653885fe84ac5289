using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.Statistics;

/// <summary>Ensembles of random matrices. The same seed gives the same matrix for any number of threads.</summary>
public static class RandomMatrices
{
    /// <summary>Independent circular complex normal elements with E|t|² = 1, row r drawn from stream r of the seed.</summary>
    /// <exception cref="ArgumentOutOfRangeException">A size is negative.</exception>
    public static ComplexMatrix Gaussian(int rows, int columns, ulong seed)
    {
        var matrix = new ComplexMatrix(rows, columns);
        Parallel.For(0, rows, row =>
        {
            var random = new SeededRandom(seed, (ulong)row);
            foreach (ref Complex64 element in matrix.Row(row))
            {
                element = (Complex64)random.NextComplexNormal();
            }
        });
        return matrix;
    }

    /// <summary>
    /// <paramref name="columns"/> columns of a unitary matrix drawn from Haar's measure: Gaussian columns made orthonormal by
    /// Gram–Schmidt, whose triangular factor has the positive diagonal that the measure demands (Mezzadri, Notices AMS 54, 592
    /// (2007)). Twice, for orthogonality to rounding.
    /// </summary>
    /// <param name="size">Rows, ≥ <paramref name="columns"/>.</param>
    /// <param name="columns">Columns; equal to <paramref name="size"/> for a whole unitary matrix.</param>
    /// <param name="seed">The seed.</param>
    /// <returns>size × columns, row-major.</returns>
    /// <exception cref="ArgumentOutOfRangeException">There are more columns than rows.</exception>
    public static Complex128Matrix HaarUnitary(int size, int columns, ulong seed)
    {
        Preconditions.InRange(columns, 0, size);
        var vectors = new Complex[columns][];
        for (int column = 0; column < columns; column++)
        {
            var random = new SeededRandom(seed, (ulong)column);
            vectors[column] = [.. Enumerable.Range(0, size).Select(_ => random.NextComplexNormal())];
            for (int pass = 0; pass < 2; pass++)
            {
                RemoveEarlier(vectors, column);
            }
        }

        var unitary = new Complex128Matrix(size, columns);
        for (int row = 0; row < size; row++)
        {
            for (int column = 0; column < columns; column++)
            {
                unitary[row, column] = vectors[column][row];
            }
        }

        return unitary;
    }

    private static void RemoveEarlier(Complex[][] vectors, int column)
    {
        Complex[] vector = vectors[column];
        for (int earlier = 0; earlier < column; earlier++)
        {
            Complex component = Inner(vectors[earlier], vector);
            for (int k = 0; k < vector.Length; k++)
            {
                vector[k] -= component * vectors[earlier][k];
            }
        }

        double norm = Math.Sqrt(Inner(vector, vector).Real);
        for (int k = 0; k < vector.Length; k++)
        {
            vector[k] /= norm;
        }
    }

    private static Complex Inner(Complex[] x, Complex[] y)
    {
        Complex sum = Complex.Zero;
        for (int k = 0; k < x.Length; k++)
        {
            sum += Complex.Conjugate(x[k]) * y[k];
        }

        return sum;
    }
}
