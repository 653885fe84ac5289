using System.Numerics;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The counts of all frames at some pixels, dark level taken off: enough to find every frame's phase, as that is common to all
/// pixels. Counts at full scale say nothing and stand as NaN; so does what fills the last register.
/// </summary>
internal sealed class PixelSample
{
    private const int RunPixels = 64;

    // Fewer pixels for very long measurements, so that the sample stays below 128 MiB. Not a matter of the memory budget: the result
    // must not depend on it.
    private const int MostCounts = 1 << 24;

    private readonly double[] _counts;

    private PixelSample(int frames, int pixels)
    {
        Count = (pixels + Vector<double>.Count - 1) / Vector<double>.Count * Vector<double>.Count;
        _counts = new double[(long)frames * Count];
        _counts.AsSpan().Fill(double.NaN);
    }

    /// <summary>Number of pixels, rounded up to fill registers.</summary>
    public int Count { get; }

    /// <summary>One frame's counts at the pixels.</summary>
    public ReadOnlySpan<double> Frame(int frame) => _counts.AsSpan(frame * Count, Count);

    /// <summary>Reads runs of neighbouring pixels spread evenly over the frame; all pixels of a small one.</summary>
    /// <param name="reader">The counts.</param>
    /// <param name="facts">Dark level and full scale.</param>
    /// <param name="settings">How many pixels.</param>
    public static PixelSample Read(IFrameBlockReader reader, MeasurementFacts facts, ReconstructionSettings settings)
    {
        int wanted = Math.Clamp(MostCounts / reader.FrameCount, 1, settings.DriftPixels);
        (int First, int Count)[] runs = Runs(facts.PixelCount, wanted);
        var sample = new PixelSample(reader.FrameCount, runs.Sum(r => r.Count));
        int place = 0;
        foreach ((int first, int count) in runs)
        {
            sample.ReadRun(reader, facts, first, count, place);
            place += count;
        }

        return sample;
    }

    private static (int First, int Count)[] Runs(int pixels, int wanted)
    {
        if (pixels <= wanted)
        {
            return [(0, pixels)];
        }

        int length = Math.Min(RunPixels, wanted), runs = wanted / length;
        return [.. Enumerable.Range(0, runs).Select(r => ((int)((long)r * (pixels - length) / Math.Max(1, runs - 1)), length))];
    }

    private void ReadRun(IFrameBlockReader reader, MeasurementFacts facts, int first, int count, int place)
    {
        int fullScale = facts.Manifest.Camera.FullScaleCounts;
        var counts = new ushort[reader.FrameCount * count];
        reader.Read(0, reader.FrameCount, first, count, counts);
        for (int f = 0; f < reader.FrameCount; f++)
        {
            for (int p = 0; p < count; p++)
            {
                ushort raw = counts[(f * count) + p];
                _counts[(f * Count) + place + p] = raw >= fullScale ? double.NaN : raw - facts.DarkCounts[first + p];
            }
        }
    }
}
