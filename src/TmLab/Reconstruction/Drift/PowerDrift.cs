using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>The laser power of every frame relative to the mean, from the fits inside the groups.</summary>
internal static class PowerDrift
{
    /// <summary>Power changes below this are left alone: dividing them out would gain nothing.</summary>
    public const double Negligible = 0.002;

    /// <summary>One gain a frame; all 1 when the spread is negligible.</summary>
    public static ImmutableArray<double> Gains(int frames, GroupPhases phases)
    {
        double[] gains = [.. Enumerable.Repeat(1.0, frames)];
        double squares = 0;
        int count = 0;
        for (int k = 0; k < phases.Groups.Length; k++)
        {
            StepGroup group = phases.Groups[k];
            for (int s = 0; s < group.Frames.Length; s++)
            {
                double gain = phases.Fits[k].Gain[s];
                gains[group.Frames[s]] = gain;
                squares += (gain - 1) * (gain - 1);
                count++;
            }
        }

        return Math.Sqrt(squares / count) > Negligible ? [.. gains] : [.. Enumerable.Repeat(1.0, frames)];
    }
}
