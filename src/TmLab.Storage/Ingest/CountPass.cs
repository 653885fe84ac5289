using System.Numerics;
using System.Runtime.InteropServices;

namespace TmLab.Storage.Ingest;

/// <summary>What one pass over a frame's counts finds.</summary>
/// <param name="Sum">Σ counts; exact.</param>
/// <param name="Largest">The largest count.</param>
/// <param name="Saturated">Number of counts at full scale.</param>
internal readonly record struct CountPass(ulong Sum, ushort Largest, int Saturated)
{
    // 16-bit counters of full-scale pixels and 32-bit sums overflow after that many vectors.
    private const int BlockVectors = 32768;

    /// <summary>Passes over a frame with vectors.</summary>
    public static CountPass Over(ReadOnlySpan<ushort> counts, ushort fullScale)
    {
        ReadOnlySpan<Vector<ushort>> vectors = MemoryMarshal.Cast<ushort, Vector<ushort>>(counts);
        CountPass total = default;
        for (int at = 0; at < vectors.Length; at += BlockVectors)
        {
            total = total.With(OverBlock(vectors.Slice(at, Math.Min(BlockVectors, vectors.Length - at)), fullScale));
        }

        return total.With(OverScalar(counts[(vectors.Length * Vector<ushort>.Count)..], fullScale));
    }

    /// <summary>The same, one count at a time: the plain statement of what is computed.</summary>
    public static CountPass OverScalar(ReadOnlySpan<ushort> counts, ushort fullScale)
    {
        ulong sum = 0;
        ushort largest = 0;
        int saturated = 0;
        foreach (ushort count in counts)
        {
            sum += count;
            largest = Math.Max(largest, count);
            saturated += count == fullScale ? 1 : 0;
        }

        return new CountPass(sum, largest, saturated);
    }

    private static CountPass OverBlock(ReadOnlySpan<Vector<ushort>> vectors, ushort fullScale)
    {
        var full = new Vector<ushort>(fullScale);
        Vector<uint> low = Vector<uint>.Zero;
        Vector<uint> high = Vector<uint>.Zero;
        Vector<ushort> largest = Vector<ushort>.Zero;
        Vector<ushort> saturated = Vector<ushort>.Zero;
        foreach (Vector<ushort> counts in vectors)
        {
            Vector.Widen(counts, out Vector<uint> first, out Vector<uint> second);
            low += first;
            high += second;
            largest = Vector.Max(largest, counts);
            saturated -= Vector.Equals(counts, full);
        }

        return new CountPass(SumOf(low) + SumOf(high), LargestOf(largest), (int)SumOf(saturated));
    }

    private static ulong SumOf(Vector<uint> lanes)
    {
        Vector.Widen(lanes, out Vector<ulong> low, out Vector<ulong> high);
        return Vector.Sum(low) + Vector.Sum(high);
    }

    private static ulong SumOf(Vector<ushort> lanes)
    {
        Vector.Widen(lanes, out Vector<uint> low, out Vector<uint> high);
        return Vector.Sum(low) + Vector.Sum(high);
    }

    private static ushort LargestOf(Vector<ushort> lanes)
    {
        ushort largest = 0;
        for (int i = 0; i < Vector<ushort>.Count; i++)
        {
            largest = Math.Max(largest, lanes[i]);
        }

        return largest;
    }

    private CountPass With(CountPass other) => new(Sum + other.Sum, Math.Max(Largest, other.Largest), Saturated + other.Saturated);
}
