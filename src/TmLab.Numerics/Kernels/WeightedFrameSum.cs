using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.Kernels;

/// <summary>
/// The demodulation kernel: D[p] = Σ_s w[s] · I[s, p] for complex weights w and 16-bit counts I, pixels along the lanes. Every
/// linear demodulation is of this form; its weights come from <c>Reconstruction</c>.
/// </summary>
public static class WeightedFrameSum
{
    /// <summary>Computes the sum with vector instructions; equal to <see cref="RunScalar"/> to the last bit.</summary>
    /// <param name="counts">Counts, shape (frame, pixel) with <paramref name="stride"/> pixels from one frame to the next.</param>
    /// <param name="stride">Elements from one frame to the next.</param>
    /// <param name="frames">The frames to sum, as row numbers of <paramref name="counts"/>.</param>
    /// <param name="weights">One weight for each of <paramref name="frames"/>.</param>
    /// <param name="real">Takes the real parts; its length is the number of pixels, a multiple of <see cref="ModePlanes.LaneMultiple"/>.</param>
    /// <param name="imaginary">Takes the imaginary parts, as long as <paramref name="real"/>.</param>
    /// <exception cref="ArgumentException">Lengths disagree or a frame lies outside the counts.</exception>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public static void Run(
        ReadOnlySpan<ushort> counts,
        int stride,
        ReadOnlySpan<int> frames,
        ReadOnlySpan<Complex64> weights,
        Span<float> real,
        Span<float> imaginary)
    {
        Check(counts.Length, stride, frames, weights, real, imaginary);
        for (int p = 0; p < real.Length; p += Vector<ushort>.Count)
        {
            RunStep(counts, stride, frames, weights, p, real, imaginary);
        }
    }

    /// <summary>The same by the definition, one pixel at a time: the oracle of the vector form.</summary>
    /// <inheritdoc cref="Run"/>
    public static void RunScalar(
        ReadOnlySpan<ushort> counts,
        int stride,
        ReadOnlySpan<int> frames,
        ReadOnlySpan<Complex64> weights,
        Span<float> real,
        Span<float> imaginary)
    {
        Check(counts.Length, stride, frames, weights, real, imaginary);
        for (int p = 0; p < real.Length; p++)
        {
            float re = 0, im = 0;
            for (int s = 0; s < frames.Length; s++)
            {
                float count = counts[(frames[s] * stride) + p];
                re += weights[s].r * count;
                im += weights[s].i * count;
            }

            real[p] = re;
            imaginary[p] = im;
        }
    }

    // One register of counts: widened to two registers of singles, multiplied and added without fused operations, so that the
    // result does not depend on the instruction set.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void RunStep(
        ReadOnlySpan<ushort> counts,
        int stride,
        ReadOnlySpan<int> frames,
        ReadOnlySpan<Complex64> weights,
        int pixel,
        Span<float> real,
        Span<float> imaginary)
    {
        Vector<float> re0 = default, re1 = default, im0 = default, im1 = default;
        ref ushort first = ref Unsafe.Add(ref MemoryMarshal.GetReference(counts), pixel);
        for (int s = 0; s < frames.Length; s++)
        {
            Vector<ushort> packed = Vector.LoadUnsafe(ref first, (nuint)frames[s] * (nuint)stride);
            Vector.Widen(packed, out Vector<uint> low, out Vector<uint> high);
            Vector<float> count0 = Vector.ConvertToSingle(low.As<uint, int>());
            Vector<float> count1 = Vector.ConvertToSingle(high.As<uint, int>());
            var wr = new Vector<float>(weights[s].r);
            var wi = new Vector<float>(weights[s].i);
            re0 += wr * count0;
            re1 += wr * count1;
            im0 += wi * count0;
            im1 += wi * count1;
        }

        re0.StoreUnsafe(ref MemoryMarshal.GetReference(real), (nuint)pixel);
        im0.StoreUnsafe(ref MemoryMarshal.GetReference(imaginary), (nuint)pixel);
        re1.StoreUnsafe(ref MemoryMarshal.GetReference(real), (nuint)(pixel + Vector<float>.Count));
        im1.StoreUnsafe(ref MemoryMarshal.GetReference(imaginary), (nuint)(pixel + Vector<float>.Count));
    }

    private static void Check(
        int available, int stride, ReadOnlySpan<int> frames, ReadOnlySpan<Complex64> weights, Span<float> real, Span<float> imaginary)
    {
        Preconditions.SameLength(weights.Length, frames.Length);
        Preconditions.SameLength(imaginary.Length, real.Length);
        Preconditions.Require(real.Length % Vector<ushort>.Count == 0, "The pixels must fill whole registers.");
        foreach (int frame in frames)
        {
            Preconditions.InRange(((long)frame * stride) + real.Length, real.Length, available);
        }
    }
}
