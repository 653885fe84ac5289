using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Statistics;
using TmLab.TestKit;

namespace TmLab.OutsideTests;

/// <summary>Haar × diagonal × Haar: a matrix whose singular values are known, up to the rounding of its elements.</summary>
internal static class KnownSpectrum
{
    public static InMemoryMatrix Matrix(int rows, double[] values, ulong seed)
    {
        using Complex128Matrix u = RandomMatrices.HaarUnitary(rows, values.Length, seed);
        using Complex128Matrix v = RandomMatrices.HaarUnitary(values.Length, values.Length, seed + 1);
        var matrix = new InMemoryMatrix(rows, values.Length);
        for (int row = 0; row < rows; row++)
        {
            for (int column = 0; column < values.Length; column++)
            {
                Complex sum = Complex.Zero;
                for (int k = 0; k < values.Length; k++)
                {
                    sum += u[row, k] * values[k] * Complex.Conjugate(v[column, k]);
                }

                matrix.Row(row)[column] = (Complex64)sum;
            }
        }

        return matrix;
    }
}
