using System.Numerics;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>Rows that form part of a unitary matrix: their completion where values vanish, and their adjoint.</summary>
internal static class OrthonormalRows
{
    // Relative to the largest value: below it a row's direction is rounding noise.
    private const double Vanishing = 1e-15;

    /// <summary>
    /// Replaces the rows whose value vanishes by rows orthogonal to all others, taken from the unit vectors by Gram–Schmidt,
    /// twice (Giraud et al., Numer. Math. 101, 87 (2005)).
    /// </summary>
    /// <param name="rows">Rows, orthonormal where the value does not vanish.</param>
    /// <param name="values">Their values, descending.</param>
    public static void Complete(Complex128Matrix rows, double[] values)
    {
        int candidate = 0;
        for (int row = 0; row < rows.Rows; row++)
        {
            while (values[row] <= Vanishing * values[0] && !TryUnitVector(rows, row, candidate++))
            {
            }
        }
    }

    /// <summary>The conjugate transpose.</summary>
    public static Complex128Matrix Adjoint(Complex128Matrix rows)
    {
        var adjoint = new Complex128Matrix(rows.Columns, rows.Rows);
        for (int row = 0; row < rows.Rows; row++)
        {
            for (int column = 0; column < rows.Columns; column++)
            {
                adjoint[column, row] = Complex.Conjugate(rows[row, column]);
            }
        }

        return adjoint;
    }

    private static bool TryUnitVector(Complex128Matrix rows, int row, int index)
    {
        Span<Complex> vector = rows.Row(row);
        vector.Clear();
        vector[index] = Complex.One;
        for (int pass = 0; pass < 2; pass++)
        {
            for (int other = 0; other < row; other++)
            {
                RemoveComponent(vector, rows.Row(other));
            }
        }

        double norm = Math.Sqrt(Norm2(vector));
        foreach (ref Complex element in vector)
        {
            element /= norm;
        }

        // Of n unit vectors, the largest remainder is at least √((n − row)/n); half of its least value is safe and always met.
        return norm > 0.5 / Math.Sqrt(rows.Columns);
    }

    private static void RemoveComponent(Span<Complex> vector, ReadOnlySpan<Complex> unit)
    {
        Complex component = Complex.Zero;
        for (int k = 0; k < vector.Length; k++)
        {
            component += Complex.Conjugate(unit[k]) * vector[k];
        }

        for (int k = 0; k < vector.Length; k++)
        {
            vector[k] -= component * unit[k];
        }
    }

    private static double Norm2(ReadOnlySpan<Complex> vector)
    {
        double sum = 0;
        foreach (Complex element in vector)
        {
            sum += (element.Real * element.Real) + (element.Imaginary * element.Imaginary);
        }

        return sum;
    }
}
