using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// Between two trackers the phase is known only up to a multiple of 2π; the multiple nearest to what the groups in between let expect
/// is taken. This says where another one is nearly as likely, or more.
/// </summary>
internal static class AmbiguousGaps
{
    // Another multiple of 2π counts as excluded when it is less likely by this factor (its logarithm).
    private const double LogOdds = 7;

    // A step further from what was expected than this many standard deviations is no random walk any more…
    private const double Unexpected = 5;

    // … and beyond this many radians it may as well have been the other way round.
    private const double LargeRad = 0.5 * Math.PI;

    /// <summary>The numbers k of the gaps, from pin k to pin k + 1.</summary>
    /// <param name="schedule">The frames.</param>
    /// <param name="phases">The phases inside the groups.</param>
    /// <param name="commandedRad">The commanded phase of every frame.</param>
    /// <param name="pins">The trackers.</param>
    /// <param name="walkRate">Variance rate of the walk inside the groups, rad²/s.</param>
    public static ImmutableArray<int> Find(
        Schedule schedule, GroupPhases phases, ImmutableArray<double> commandedRad, ImmutableArray<TrackerPin> pins, double walkRate)
    {
        double common = TrackerPins.ObservedRate(schedule, phases, commandedRad, 0, phases.Groups.Length - 1);
        Gap[] gaps = [.. Enumerable.Range(0, Math.Max(0, pins.Length - 1)).Select(k => Make(k))];
        bool steady = IsSteadyDriftMoreLikely(gaps, common);
        return [.. gaps.Where(g => g.IsAmbiguous || (steady && Turns(g.Rest + (common * g.Seconds)) != 0)).Select(g => g.Number)];

        Gap Make(int k)
        {
            (TrackerPin from, TrackerPin to) = (pins[k], pins[k + 1]);
            double seconds = to.TimeS - from.TimeS;
            double rate = TrackerPins.ObservedRate(schedule, phases, commandedRad, from.Group, to.Group) - common;
            double rest = Math.IEEERemainder(to.OffsetRad - from.OffsetRad - (rate * seconds), 2 * Math.PI);
            double variance = (walkRate * Unobserved(schedule, phases, from, to)) + from.VarianceRad2 + to.VarianceRad2;
            return new Gap(k, seconds, rest, Math.Sqrt(variance));
        }
    }

    /// <summary>Seconds between two trackers in which no group was being recorded.</summary>
    private static double Unobserved(Schedule schedule, GroupPhases phases, TrackerPin from, TrackerPin to)
    {
        double observed = 0;
        for (int k = from.Group; k <= to.Group; k++)
        {
            ImmutableArray<int> frames = phases.Groups[k].Frames;
            double length = schedule.Frames[frames[^1]].TimeS - schedule.Frames[frames[0]].TimeS;
            observed += k == from.Group || k == to.Group ? length / 2 : length;
        }

        // What the groups' own phases miss by the noise of their first and last frame counts as a tenth of the time.
        double all = to.TimeS - from.TimeS;
        return Math.Max(all - observed, 0.1 * all);
    }

    // What all groups have in common was taken for an error of the steps. If as a steady drift it explains the trackers better,
    // it may be one.
    private static bool IsSteadyDriftMoreLikely(Gap[] gaps, double common) =>
        gaps.Sum(g => Math.Pow(Math.IEEERemainder(g.Rest - (common * g.Seconds), 2 * Math.PI), 2)) < gaps.Sum(g => g.Rest * g.Rest)
        && gaps.Any(g => Math.Abs(common * g.Seconds) > Math.PI);

    private static double Turns(double phase) => Math.Round(phase / (2 * Math.PI));

    private readonly record struct Gap(int Number, double Seconds, double Rest, double Sd)
    {
        public bool IsAmbiguous =>
            2 * Math.PI * (Math.PI - Math.Abs(Rest)) < LogOdds * Sd * Sd || (Math.Abs(Rest) > LargeRad && Math.Abs(Rest) > Unexpected * Sd);
    }
}
