using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Reconstruction;

/// <summary>
/// The reference's intensity at every pixel from the reference frames (signal arm blocked), dark level taken off. D = R* E, so
/// dividing a row by √|R|² leaves the field times a phase factor.
/// </summary>
/// <param name="Counts">|R|², counts.</param>
/// <param name="StandardError">Its standard error, counts.</param>
internal sealed record ReferenceIntensity(float[] Counts, float[] StandardError)
{
    /// <summary>Reads the reference frames; null when there are none.</summary>
    public static ReferenceIntensity? Read(IFrameBlockReader reader, MeasurementFacts facts)
    {
        ImmutableArray<int> frames = facts.Schedule.FramesWith(FrameRole.Reference);
        if (frames.IsEmpty)
        {
            return null;
        }

        int pixels = facts.PixelCount;
        var counts = new ushort[pixels];
        double[] sum = new double[pixels], squares = new double[pixels];
        foreach (int frame in frames)
        {
            reader.Read(frame, 1, 0, pixels, counts);
            for (int p = 0; p < pixels; p++)
            {
                double level = counts[p] - facts.DarkCounts[p];
                sum[p] += level;
                squares[p] += level * level;
            }
        }

        return new ReferenceIntensity(
            [.. sum.Select(s => (float)(s / frames.Length))],
            [.. squares.Select((q, p) => (float)MeanError(sum[p], q, frames.Length))]);
    }

    // A single frame says nothing of its own scatter: then the Poisson-like guess of one count a count, never less than rounding.
    private static double MeanError(double sum, double squares, int n)
    {
        double variance = n > 1 ? Math.Max((squares - (sum * sum / n)) / (n - 1), 1.0 / 12) : Math.Max(sum, 1);
        return Math.Sqrt(variance / n);
    }
}
