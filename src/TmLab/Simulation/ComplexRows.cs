using System.Numerics;
using System.Runtime.InteropServices;

namespace TmLab.Simulation;

/// <summary>
/// Two operations on rows of split complex numbers. Products and sums are written apart, never fused, so that the result is the
/// same on processors with and without fused multiplication and for every vector width.
/// </summary>
internal static class ComplexRows
{
    /// <summary>sum += (a + ib) · row.</summary>
    public static void AddScaled(
        float a, float b, ReadOnlySpan<float> rowRe, ReadOnlySpan<float> rowIm, Span<float> sumRe, Span<float> sumIm)
    {
        int vectorised = rowRe.Length - (rowRe.Length % Vector<float>.Count);
        ReadOnlySpan<Vector<float>> xr = MemoryMarshal.Cast<float, Vector<float>>(rowRe[..vectorised]);
        ReadOnlySpan<Vector<float>> xi = MemoryMarshal.Cast<float, Vector<float>>(rowIm[..vectorised]);
        Span<Vector<float>> sr = MemoryMarshal.Cast<float, Vector<float>>(sumRe[..vectorised]);
        Span<Vector<float>> si = MemoryMarshal.Cast<float, Vector<float>>(sumIm[..vectorised]);
        for (int i = 0; i < xr.Length; i++)
        {
            sr[i] += (xr[i] * a) - (xi[i] * b);
            si[i] += (xi[i] * a) + (xr[i] * b);
        }

        for (int i = vectorised; i < rowRe.Length; i++)
        {
            sumRe[i] += (rowRe[i] * a) - (rowIm[i] * b);
            sumIm[i] += (rowIm[i] * a) + (rowRe[i] * b);
        }
    }

    /// <summary>(x, y) becomes (x + y, x − y), element by element.</summary>
    public static void Butterfly(Span<float> x, Span<float> y)
    {
        int vectorised = x.Length - (x.Length % Vector<float>.Count);
        Span<Vector<float>> vx = MemoryMarshal.Cast<float, Vector<float>>(x[..vectorised]);
        Span<Vector<float>> vy = MemoryMarshal.Cast<float, Vector<float>>(y[..vectorised]);
        for (int i = 0; i < vx.Length; i++)
        {
            (vx[i], vy[i]) = (vx[i] + vy[i], vx[i] - vy[i]);
        }

        for (int i = vectorised; i < x.Length; i++)
        {
            (x[i], y[i]) = (x[i] + y[i], x[i] - y[i]);
        }
    }
}
