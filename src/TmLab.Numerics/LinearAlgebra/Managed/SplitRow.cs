using System.Numerics;
using System.Runtime.CompilerServices;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// The inner loops of the managed decompositions, on complex rows held as two planes of doubles: inner products, additions of
/// a multiple, rotations. Vector sums run over fixed lanes, so a result depends on the machine's vector width alone.
/// </summary>
internal static class SplitRow
{
    /// <summary>Σ conj(x_i) y_i.</summary>
    public static Complex Inner(ReadOnlySpan<double> xr, ReadOnlySpan<double> xi, ReadOnlySpan<double> yr, ReadOnlySpan<double> yi)
    {
        Vector<double> real = default, imaginary = default;
        int k = 0;
        for (; k <= xr.Length - Vector<double>.Count; k += Vector<double>.Count)
        {
            Vector<double> a = Load(xr, k), b = Load(xi, k), c = Load(yr, k), d = Load(yi, k);
            real += (a * c) + (b * d);
            imaginary += (a * d) - (b * c);
        }

        double sumReal = Vector.Sum(real), sumImaginary = Vector.Sum(imaginary);
        for (; k < xr.Length; k++)
        {
            sumReal += (xr[k] * yr[k]) + (xi[k] * yi[k]);
            sumImaginary += (xr[k] * yi[k]) - (xi[k] * yr[k]);
        }

        return new Complex(sumReal, sumImaginary);
    }

    /// <summary>y += f·x.</summary>
    public static void AddMultiple(Complex f, ReadOnlySpan<double> xr, ReadOnlySpan<double> xi, Span<double> yr, Span<double> yi)
    {
        double fr = f.Real, fi = f.Imaginary;
        var vr = new Vector<double>(fr);
        var vi = new Vector<double>(fi);
        int k = 0;
        for (; k <= xr.Length - Vector<double>.Count; k += Vector<double>.Count)
        {
            Vector<double> a = Load(xr, k), b = Load(xi, k);
            (Load(yr, k) + ((vr * a) - (vi * b))).CopyTo(yr[k..]);
            (Load(yi, k) + ((vr * b) + (vi * a))).CopyTo(yi[k..]);
        }

        for (; k < xr.Length; k++)
        {
            yr[k] += (fr * xr[k]) - (fi * xi[k]);
            yi[k] += (fr * xi[k]) + (fi * xr[k]);
        }
    }

    /// <summary>(x, y) ← (c·x − s·y, s·x + c·y), real c and s, on one plane.</summary>
    public static void Rotate(Span<double> x, Span<double> y, double c, double s)
    {
        var vc = new Vector<double>(c);
        var vs = new Vector<double>(s);
        int k = 0;
        for (; k <= x.Length - Vector<double>.Count; k += Vector<double>.Count)
        {
            Vector<double> a = Load(x, k), b = Load(y, k);
            ((vc * a) - (vs * b)).CopyTo(x[k..]);
            ((vs * a) + (vc * b)).CopyTo(y[k..]);
        }

        for (; k < x.Length; k++)
        {
            (x[k], y[k]) = ((c * x[k]) - (s * y[k]), (s * x[k]) + (c * y[k]));
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector<double> Load(ReadOnlySpan<double> from, int at) => new(from[at..]);
}
