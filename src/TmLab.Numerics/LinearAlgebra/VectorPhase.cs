using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Singular vectors are known up to a phase; this states the one that the program gives them (see <see cref="SingularVectors"/>).</summary>
internal static class VectorPhase
{
    // Elements whose squared magnitudes differ by less are a tie: vectors of Hadamard type have all of equal size up to rounding.
    private const double Tie = 1e-5;

    /// <summary>V from V†, rounded to single precision.</summary>
    public static ComplexMatrix FromAdjoint(Complex128Matrix adjoint)
    {
        var vectors = new ComplexMatrix(adjoint.Columns, adjoint.Rows);
        for (int j = 0; j < adjoint.Rows; j++)
        {
            ReadOnlySpan<Complex> row = adjoint.Row(j);
            for (int n = 0; n < row.Length; n++)
            {
                vectors[n, j] = (Complex64)Complex.Conjugate(row[n]);
            }
        }

        return vectors;
    }

    /// <summary>Turns every column to the stated phase.</summary>
    public static void Fix(ComplexMatrix vectors)
    {
        for (int column = 0; column < vectors.Columns; column++)
        {
            Complex anchor = Anchor(vectors, column);
            if (anchor != Complex.Zero)
            {
                Turn(vectors, column, Complex.Conjugate(anchor) / anchor.Magnitude);
            }
        }
    }

    private static Complex Anchor(ComplexMatrix vectors, int column)
    {
        double largest = 0;
        for (int row = 0; row < vectors.Rows; row++)
        {
            largest = Math.Max(largest, vectors[row, column].SquaredMagnitude);
        }

        for (int row = 0; row < vectors.Rows; row++)
        {
            if (vectors[row, column].SquaredMagnitude >= (1 - Tie) * largest)
            {
                return vectors[row, column];
            }
        }

        return Complex.Zero;
    }

    private static void Turn(ComplexMatrix vectors, int column, Complex phase)
    {
        for (int row = 0; row < vectors.Rows; row++)
        {
            vectors[row, column] = (Complex64)(phase * vectors[row, column]);
        }
    }
}
