using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;
using System.Runtime.Intrinsics.X86;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.Kernels;

/// <summary>
/// Turns planes (mode, pixel) into matrix rows (pixel, mode) of interleaved complex numbers, each row multiplied by a real
/// scale: out[p, n] = scale[p] · (re[n, p] + i im[n, p]).
/// </summary>
public static class InterleaveRows
{
    /// <summary>Writes the first <paramref name="pixels"/> lanes as rows.</summary>
    /// <param name="planes">The tile; its rows are the modes.</param>
    /// <param name="pixels">How many lanes hold pixels.</param>
    /// <param name="scale">One factor a lane, as many as the planes have lanes.</param>
    /// <param name="rows">Takes pixels · modes numbers, row-major.</param>
    /// <exception cref="ArgumentException">Lengths disagree.</exception>
    public static void Run(in ModePlanes planes, int pixels, ReadOnlySpan<float> scale, Span<Complex64> rows)
    {
        Check(planes, pixels, scale, rows);
        int lane = 0;
        if (Avx.IsSupported)
        {
            for (; lane + Vector256<float>.Count <= pixels; lane += Vector256<float>.Count)
            {
                EightRows(planes, lane, scale, rows);
            }
        }

        for (; lane < pixels; lane++)
        {
            OneRow(planes, lane, 0, scale[lane], rows.Slice(lane * planes.Rows, planes.Rows));
        }
    }

    /// <summary>The same one number at a time: the oracle of the vector form, equal to the last bit.</summary>
    /// <inheritdoc cref="Run"/>
    public static void RunScalar(in ModePlanes planes, int pixels, ReadOnlySpan<float> scale, Span<Complex64> rows)
    {
        Check(planes, pixels, scale, rows);
        for (int lane = 0; lane < pixels; lane++)
        {
            OneRow(planes, lane, 0, scale[lane], rows.Slice(lane * planes.Rows, planes.Rows));
        }
    }

    private static void Check(in ModePlanes planes, int pixels, ReadOnlySpan<float> scale, Span<Complex64> rows)
    {
        Preconditions.InRange(pixels, 0, planes.Lanes);
        Preconditions.AtLeast(scale.Length, planes.Lanes);
        Preconditions.AtLeast(rows.Length, (long)pixels * planes.Rows);
    }

    private static void OneRow(in ModePlanes planes, int lane, int firstMode, float scale, Span<Complex64> row)
    {
        for (int n = firstMode; n < row.Length; n++)
        {
            int at = (n * planes.Lanes) + lane;
            row[n] = new Complex64(planes.Real[at] * scale, planes.Imaginary[at] * scale);
        }
    }

    // Four modes × eight pixels at a time: parts are interleaved to complex numbers, then 4 × 4 blocks of these are transposed.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static void EightRows(in ModePlanes planes, int lane, ReadOnlySpan<float> scale, Span<Complex64> rows)
    {
        int modes = planes.Rows;
        Vector256<float> factor = Vector256.LoadUnsafe(ref MemoryMarshal.GetReference(scale), (nuint)lane);
        ref float target = ref Unsafe.As<Complex64, float>(ref MemoryMarshal.GetReference(rows));
        int n = 0;
        for (; n + 4 <= modes; n += 4)
        {
            (Vector256<float> a0, Vector256<float> b0) = Pairs(planes, n, lane, factor);
            (Vector256<float> a1, Vector256<float> b1) = Pairs(planes, n + 1, lane, factor);
            (Vector256<float> a2, Vector256<float> b2) = Pairs(planes, n + 2, lane, factor);
            (Vector256<float> a3, Vector256<float> b3) = Pairs(planes, n + 3, lane, factor);
            // Unpacking leaves pixels 0, 1, 4, 5 in a and 2, 3, 6, 7 in b.
            StoreFour(ref target, (lane * modes) + n, modes, a0, a1, a2, a3);
            StoreFour(ref target, ((lane + 2) * modes) + n, modes, b0, b1, b2, b3);
        }

        for (int p = 0; n < modes && p < Vector256<float>.Count; p++)
        {
            OneRow(planes, lane + p, n, scale[lane + p], rows.Slice((lane + p) * modes, modes));
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static (Vector256<float> A, Vector256<float> B) Pairs(
        in ModePlanes planes, int mode, int lane, Vector256<float> factor)
    {
        nuint at = (nuint)((mode * planes.Lanes) + lane);
        Vector256<float> re = Vector256.LoadUnsafe(ref MemoryMarshal.GetReference(planes.Real), at) * factor;
        Vector256<float> im = Vector256.LoadUnsafe(ref MemoryMarshal.GetReference(planes.Imaginary), at) * factor;
        return (Avx.UnpackLow(re, im), Avx.UnpackHigh(re, im));
    }

    // v0 … v3 are modes n … n+3, each holding pixels p, p+1, p+4, p+5.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void StoreFour(
        ref float target, int start, int modes, Vector256<float> v0, Vector256<float> v1, Vector256<float> v2, Vector256<float> v3)
    {
        Vector256<double> low01 = Avx.UnpackLow(v0.AsDouble(), v1.AsDouble());
        Vector256<double> high01 = Avx.UnpackHigh(v0.AsDouble(), v1.AsDouble());
        Vector256<double> low23 = Avx.UnpackLow(v2.AsDouble(), v3.AsDouble());
        Vector256<double> high23 = Avx.UnpackHigh(v2.AsDouble(), v3.AsDouble());
        Store(Avx.Permute2x128(low01, low23, 0x20), ref target, start);
        Store(Avx.Permute2x128(high01, high23, 0x20), ref target, start + modes);
        Store(Avx.Permute2x128(low01, low23, 0x31), ref target, start + (4 * modes));
        Store(Avx.Permute2x128(high01, high23, 0x31), ref target, start + (5 * modes));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Store(Vector256<double> four, ref float target, int at) =>
        four.AsSingle().StoreUnsafe(ref target, (nuint)at * 2);
}
