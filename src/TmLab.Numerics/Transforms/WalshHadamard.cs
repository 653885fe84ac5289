using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace TmLab.Numerics.Transforms;

/// <summary>
/// The Walsh–Hadamard transform in Sylvester (natural) order, unnormalised: y[k] = Σ_n (−1)^popcount(k &amp; n) x[n]. It is its own
/// inverse up to the factor N. N log₂ N additions; sources: Harwit &amp; Sloane, Hadamard Transform Optics (1979).
/// </summary>
public static class WalshHadamard
{
    /// <summary>
    /// Transforms a plane along its rows, in place: shape (row, lane), the number of rows a power of two. Passes of radix 8, then
    /// 4 or 2 for what is left. The additions are those of <see cref="TransformScalar"/> in the same order, so both agree to the last bit.
    /// </summary>
    /// <param name="plane">rows · lanes numbers.</param>
    /// <param name="rows">A power of two.</param>
    /// <param name="lanes">A multiple of the register's number of singles.</param>
    /// <exception cref="ArgumentException">The shape is not as said.</exception>
    public static void Transform(Span<float> plane, int rows, int lanes)
    {
        Check(plane, rows, lanes);
        Preconditions.Require(lanes % Vector<float>.Count == 0, "The lanes must fill whole registers.");
        int step = 1;
        for (; step <= rows / 8; step *= 8)
        {
            Pass8(plane, rows, step, lanes);
        }

        switch (rows / step)
        {
            case 4: Pass4(plane, rows, step, lanes); break;
            case 2: Pass2(plane, rows, step, lanes); break;
        }
    }

    /// <summary>The same by radix-2 butterflies, one number at a time: the oracle of the vector form.</summary>
    /// <inheritdoc cref="Transform"/>
    public static void TransformScalar(Span<float> plane, int rows, int lanes)
    {
        Check(plane, rows, lanes);
        for (int step = 1; step < rows; step *= 2)
        {
            for (int row = 0; row < rows; row++)
            {
                if ((row & step) == 0)
                {
                    Butterfly(plane.Slice(row * lanes, lanes), plane.Slice((row + step) * lanes, lanes));
                }
            }
        }
    }

    /// <summary>
    /// The natural-order row that has <paramref name="sequency"/> sign changes, for N = 2^<paramref name="bits"/> rows: the bits of the
    /// Gray code of the sequency, reversed (Harwit &amp; Sloane 1979).
    /// </summary>
    public static int NaturalRowOfSequency(int sequency, int bits)
    {
        Preconditions.InRange(bits, 0, 30);
        Preconditions.InRange(sequency, 0, (1 << bits) - 1);
        int gray = sequency ^ (sequency >> 1);
        int row = 0;
        for (int bit = 0; bit < bits; bit++)
        {
            row |= ((gray >> bit) & 1) << (bits - 1 - bit);
        }

        return row;
    }

    private static void Check(Span<float> plane, int rows, int lanes)
    {
        Preconditions.Require(rows > 0 && BitOperations.IsPow2(rows), "The number of rows must be a power of two.");
        Preconditions.SameLength(plane.Length, (long)rows * lanes);
    }

    private static void Butterfly(Span<float> a, Span<float> b)
    {
        for (int lane = 0; lane < a.Length; lane++)
        {
            (a[lane], b[lane]) = (a[lane] + b[lane], a[lane] - b[lane]);
        }
    }

    // Rows row, row + step, … , row + 7 step hold one butterfly of radix 8: three radix-2 levels without leaving the registers.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static void Pass8(Span<float> plane, int rows, int step, int lanes)
    {
        ref float origin = ref MemoryMarshal.GetReference(plane);
        nuint stride = (nuint)step * (nuint)lanes;
        for (int block = 0; block < rows; block += 8 * step)
        {
            nuint start = (nuint)block * (nuint)lanes;
            for (nuint at = start; at < start + stride; at += (nuint)Vector<float>.Count)
            {
                Radix8(ref origin, at, stride);
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static void Pass4(Span<float> plane, int rows, int step, int lanes)
    {
        ref float origin = ref MemoryMarshal.GetReference(plane);
        nuint stride = (nuint)step * (nuint)lanes;
        for (int block = 0; block < rows; block += 4 * step)
        {
            nuint start = (nuint)block * (nuint)lanes;
            for (nuint at = start; at < start + stride; at += (nuint)Vector<float>.Count)
            {
                Radix4(ref origin, at, stride);
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static void Pass2(Span<float> plane, int rows, int step, int lanes)
    {
        ref float origin = ref MemoryMarshal.GetReference(plane);
        nuint stride = (nuint)step * (nuint)lanes;
        for (int block = 0; block < rows; block += 2 * step)
        {
            nuint start = (nuint)block * (nuint)lanes;
            for (nuint at = start; at < start + stride; at += (nuint)Vector<float>.Count)
            {
                Vector<float> a = Vector.LoadUnsafe(ref origin, at), b = Vector.LoadUnsafe(ref origin, at + stride);
                (a + b).StoreUnsafe(ref origin, at);
                (a - b).StoreUnsafe(ref origin, at + stride);
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Radix8(ref float origin, nuint at, nuint stride)
    {
        Vector<float> x0 = Vector.LoadUnsafe(ref origin, at);
        Vector<float> x1 = Vector.LoadUnsafe(ref origin, at + stride);
        Vector<float> x2 = Vector.LoadUnsafe(ref origin, at + (2 * stride));
        Vector<float> x3 = Vector.LoadUnsafe(ref origin, at + (3 * stride));
        Vector<float> x4 = Vector.LoadUnsafe(ref origin, at + (4 * stride));
        Vector<float> x5 = Vector.LoadUnsafe(ref origin, at + (5 * stride));
        Vector<float> x6 = Vector.LoadUnsafe(ref origin, at + (6 * stride));
        Vector<float> x7 = Vector.LoadUnsafe(ref origin, at + (7 * stride));
        (x0, x1, x2, x3) = (x0 + x1, x0 - x1, x2 + x3, x2 - x3);
        (x4, x5, x6, x7) = (x4 + x5, x4 - x5, x6 + x7, x6 - x7);
        (x0, x2, x1, x3) = (x0 + x2, x0 - x2, x1 + x3, x1 - x3);
        (x4, x6, x5, x7) = (x4 + x6, x4 - x6, x5 + x7, x5 - x7);
        (x0 + x4).StoreUnsafe(ref origin, at);
        (x1 + x5).StoreUnsafe(ref origin, at + stride);
        (x2 + x6).StoreUnsafe(ref origin, at + (2 * stride));
        (x3 + x7).StoreUnsafe(ref origin, at + (3 * stride));
        (x0 - x4).StoreUnsafe(ref origin, at + (4 * stride));
        (x1 - x5).StoreUnsafe(ref origin, at + (5 * stride));
        (x2 - x6).StoreUnsafe(ref origin, at + (6 * stride));
        (x3 - x7).StoreUnsafe(ref origin, at + (7 * stride));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Radix4(ref float origin, nuint at, nuint stride)
    {
        Vector<float> x0 = Vector.LoadUnsafe(ref origin, at);
        Vector<float> x1 = Vector.LoadUnsafe(ref origin, at + stride);
        Vector<float> x2 = Vector.LoadUnsafe(ref origin, at + (2 * stride));
        Vector<float> x3 = Vector.LoadUnsafe(ref origin, at + (3 * stride));
        (x0, x1, x2, x3) = (x0 + x1, x0 - x1, x2 + x3, x2 - x3);
        (x0 + x2).StoreUnsafe(ref origin, at);
        (x1 + x3).StoreUnsafe(ref origin, at + stride);
        (x0 - x2).StoreUnsafe(ref origin, at + (2 * stride));
        (x1 - x3).StoreUnsafe(ref origin, at + (3 * stride));
    }
}
