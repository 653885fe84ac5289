using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>The laser power of every frame relative to the mean, from the fits inside the groups.</summary>
internal static class PowerDrift
{
    /// <summary>Power changes below this are left alone: dividing them out would gain nothing.</summary>
    public const double Negligible = 0.002;

    // The gains' squares must exceed what their noise lets expect by this factor.
    private const double Significant = 1.5;

    /// <summary>
    /// One gain a frame; all 1 when their spread is negligible or no more than their own noise. The rest is drawn towards 1 by the
    /// noise' share of the spread (Wiener): a wrong gain takes a wrong share of the whole background off.
    /// </summary>
    public static ImmutableArray<double> Gains(int frames, GroupPhases phases)
    {
        (double squares, double noise, int count) = (0, 0, 0);
        foreach (GroupFit fit in phases.Fits.Where(f => double.IsFinite(f.GainVariance)))
        {
            squares += fit.Gain.Sum(g => (g - 1) * (g - 1));
            noise += fit.GainVariance * fit.Gain.Length;
            count += fit.Gain.Length;
        }

        double[] gains = [.. Enumerable.Repeat(1.0, frames)];
        double spread = Math.Max(0, squares - noise) / Math.Max(1, count);
        if (squares < Significant * noise || spread < Negligible * Negligible)
        {
            return [.. gains];
        }

        for (int k = 0; k < phases.Groups.Length; k++)
        {
            StepGroup group = phases.Groups[k];
            double variance = double.IsFinite(phases.Fits[k].GainVariance) ? phases.Fits[k].GainVariance : double.PositiveInfinity;
            for (int s = 0; s < group.Frames.Length; s++)
            {
                gains[group.Frames[s]] = 1 + ((phases.Fits[k].Gain[s] - 1) * spread / (spread + variance));
            }
        }

        return [.. gains];
    }
}
