using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.Kernels;

/// <summary>A small dense matrix times the planes of a tile: out[n, p] = Σ_k W[n, k] in[k, p]; N · K complex products a pixel.</summary>
public static class PlaneProduct
{
    /// <summary>Multiplies in place: K rows in, the first N rows out; the scratch planes are overwritten.</summary>
    /// <param name="planes">The tile, K rows.</param>
    /// <param name="matrix">W, row-major, N · K numbers with N ≤ K.</param>
    /// <exception cref="ArgumentException">W is not a whole number of rows or has more than K.</exception>
    public static void Run(in ModePlanes planes, ReadOnlySpan<Complex64> matrix)
    {
        int inner = planes.Rows;
        Preconditions.Require(matrix.Length % inner == 0 && matrix.Length / inner <= inner, "The matrix must be N × K with N ≤ K.");
        planes.Real.CopyTo(planes.ScratchReal);
        planes.Imaginary.CopyTo(planes.ScratchImaginary);
        for (int row = 0; row < matrix.Length / inner; row++)
        {
            Combine(planes, row, matrix.Slice(row * inner, inner));
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static void Combine(in ModePlanes planes, int row, ReadOnlySpan<Complex64> weights)
    {
        Span<Vector<float>> re = MemoryMarshal.Cast<float, Vector<float>>(planes.RealRow(row));
        Span<Vector<float>> im = MemoryMarshal.Cast<float, Vector<float>>(planes.ImaginaryRow(row));
        re.Clear();
        im.Clear();
        for (int k = 0; k < weights.Length; k++)
        {
            Complex64 w = weights[k];
            Span<Vector<float>> xr = MemoryMarshal.Cast<float, Vector<float>>(planes.ScratchReal.Slice(k * planes.Lanes, planes.Lanes));
            Span<Vector<float>> xi = MemoryMarshal.Cast<float, Vector<float>>(planes.ScratchImaginary.Slice(k * planes.Lanes, planes.Lanes));
            for (int v = 0; v < re.Length; v++)
            {
                re[v] += (xr[v] * w.r) - (xi[v] * w.i);
                im[v] += (xr[v] * w.i) + (xi[v] * w.r);
            }
        }
    }
}
