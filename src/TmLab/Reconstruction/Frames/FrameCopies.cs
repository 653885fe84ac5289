using TmLab.Measurement;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction.Frames;

/// <summary>Frames that are copies of the frame before them, count by count: with noise that does not happen by chance.</summary>
internal static class FrameCopies
{
    private const int FewestPixels = 16;

    // A source without light or noise repeats itself all the time; that is another trouble.
    private const double LargestShare = 0.1;

    /// <summary>Places of phase-stepped frames that repeat the place before although another step or pattern was due.</summary>
    public static HashSet<int> Find(Schedule schedule, PixelSample sample)
    {
        int[] copies = [.. Enumerable.Range(1, Math.Max(0, schedule.Frames.Length - 1)).Where(f => IsCopy(schedule, sample, f))];
        return copies.Length <= Math.Max(2, LargestShare * schedule.Frames.Length) ? [.. copies] : [];
    }

    private static bool IsCopy(Schedule schedule, PixelSample sample, int place)
    {
        (ScheduledFrame a, ScheduledFrame b) = (schedule.Frames[place - 1], schedule.Frames[place]);
        bool sameDue = a.Mode == b.Mode && StepChecks.DistinctPhases([a.PhaseRad, b.PhaseRad]) == 1;
        return a.IsStepped && b.IsStepped && !sameDue && AreEqual(sample.Frame(place - 1), sample.Frame(place));
    }

    private static bool AreEqual(ReadOnlySpan<double> a, ReadOnlySpan<double> b)
    {
        int equal = 0;
        for (int p = 0; p < a.Length; p++)
        {
            if (a[p] != b[p] && !(double.IsNaN(a[p]) && double.IsNaN(b[p])))
            {
                return false;
            }

            equal += double.IsNaN(a[p]) ? 0 : 1;
        }

        return equal >= FewestPixels;
    }
}
