using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>One showing of the tracked pattern: where the drift is known absolutely.</summary>
/// <param name="Group">The group's place in the schedule's groups.</param>
/// <param name="TimeS">Mean time of its frames.</param>
/// <param name="OffsetRad">ψ: what must be added to the group's own phases to refer them to the first showing, unwrapped.</param>
/// <param name="VarianceRad2">Variance of ψ.</param>
/// <param name="Similarity">|⟨D_0, D_k⟩|²/(⟨D_0,D_0⟩⟨D_k,D_k⟩).</param>
internal readonly record struct TrackerPin(int Group, double TimeS, double OffsetRad, double VarianceRad2, double Similarity);

/// <summary>Compares all showings of the pattern that is shown most often: trackers, and that pattern as a mode.</summary>
internal static class TrackerPins
{
    /// <summary>Neighbouring pixels of a speckle grain carry the same noise of decorrelation: one pixel in four counts as independent.</summary>
    public const double IndependentShare = 0.25;

    /// <summary>The pins in order of time; empty with fewer than two showings of any tracker's pattern.</summary>
    /// <param name="schedule">The frames.</param>
    /// <param name="phases">The phases inside the groups.</param>
    /// <param name="commandedRad">The commanded phase of every frame.</param>
    public static ImmutableArray<TrackerPin> Find(Schedule schedule, GroupPhases phases, ImmutableArray<double> commandedRad)
    {
        int[] showings = Showings(phases.Groups);
        if (showings.Length < 2)
        {
            return [];
        }

        var pins = new List<TrackerPin>();
        foreach (int group in showings)
        {
            (Complex overlap, double a, double b, int pixels) = phases.Overlap(group, showings[0]);
            double similarity = ((overlap.Real * overlap.Real) + (overlap.Imaginary * overlap.Imaginary)) / (a * b);
            double variance = (1 - Math.Min(similarity, 1)) / Math.Max(2 * similarity * pixels * IndependentShare, 1e-9);
            double time = phases.Groups[group].Frames.Average(f => schedule.Frames[f].TimeS);
            double offset = pins.Count == 0 ? 0 : Unwrapped(schedule, phases, commandedRad, pins[^1], group, time, overlap.Phase);
            pins.Add(new TrackerPin(group, time, offset, Math.Max(variance, 1e-10), similarity));
        }

        return [.. pins];
    }

    private static int[] Showings(ImmutableArray<StepGroup> groups)
    {
        int? pattern = groups.Where(g => g.Role == FrameRole.Tracker).GroupBy(g => g.Mode).OrderByDescending(g => g.Count()).FirstOrDefault()?.Key;
        return [.. Enumerable.Range(0, groups.Length).Where(k => groups[k].Mode == pattern)];
    }

    // The branch of 2π nearest to what the groups between the two showings let expect. What all groups have in common is taken for
    // an error of the steps, not for drift: a constant drift rate cannot be told from it inside the groups.
    private static double Unwrapped(
        Schedule schedule, GroupPhases phases, ImmutableArray<double> commandedRad, TrackerPin before, int group, double time, double wrapped)
    {
        double common = ObservedRate(schedule, phases, commandedRad, 0, phases.Groups.Length - 1);
        double rate = ObservedRate(schedule, phases, commandedRad, before.Group, group) - common;
        double expected = before.OffsetRad + (rate * (time - before.TimeS));
        return expected + Math.IEEERemainder(wrapped - expected, 2 * Math.PI);
    }

    /// <summary>Mean drift rate inside the groups from one group to another, rad/s.</summary>
    public static double ObservedRate(Schedule schedule, GroupPhases phases, ImmutableArray<double> commandedRad, int from, int to)
    {
        double moved = 0, time = 0;
        for (int k = Math.Min(from, to); k <= Math.Max(from, to); k++)
        {
            ImmutableArray<int> frames = phases.Groups[k].Frames;
            moved += phases.Fits[k].PhaseRad[^1] - phases.Fits[k].PhaseRad[0] - (commandedRad[frames[^1]] - commandedRad[frames[0]]);
            time += schedule.Frames[frames[^1]].TimeS - schedule.Frames[frames[0]].TimeS;
        }

        return time > 0 ? moved / time : 0;
    }
}
