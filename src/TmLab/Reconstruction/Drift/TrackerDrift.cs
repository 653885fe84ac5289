using System.Collections.Immutable;
using System.Numerics;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The phase drift from the trackers: D of each tracker is that of the first times e^{iφ} (and whatever else changed), so
/// φ_k = arg Σ_p D_k conj(D_0); unwrapped from one tracker to the next and interpolated linearly in time.
/// </summary>
public static class TrackerDrift
{
    /// <summary>Follows the drift; with fewer than two trackers there is nothing to follow.</summary>
    /// <param name="reader">The counts.</param>
    /// <param name="schedule">The frames.</param>
    /// <param name="arm">Which arm was stepped.</param>
    public static DriftFacts Follow(IFrameBlockReader reader, Schedule schedule, SteppedArm arm)
    {
        ImmutableArray<StepGroup> trackers = OfMostShownPattern(schedule);
        if (trackers.Length < 2)
        {
            return DriftFacts.None(schedule.Frames.Length);
        }

        DriftFacts nothing = DriftFacts.None(schedule.Frames.Length);
        ImmutableArray<double> commanded = FramePhases.Total(schedule, arm, nothing);
        (Complex[] overlaps, double[] energies) = Overlaps(reader, trackers, commanded);
        double[] times = [.. trackers.Select(t => t.Frames.Average(f => schedule.Frames[f].TimeS))];
        double[] phases = Unwrap(overlaps);
        return new DriftFacts(
            DriftMethod.TrackersInterpolated,
            [.. times],
            [.. phases],
            [.. overlaps.Select((o, k) => Similarity(o, energies[0], energies[k]))],
            [.. schedule.Frames.Select(f => TimeInterpolation.Linear(times, phases, f.TimeS))],
            nothing.FramePhaseSdRad,
            [],
            nothing.FrameGain,
            double.NaN);
    }

    // Different patterns have no common phase, so one pattern is followed: the one shown most often.
    private static ImmutableArray<StepGroup> OfMostShownPattern(Schedule schedule) =>
        [.. schedule.Trackers.GroupBy(t => t.Mode).OrderByDescending(g => g.Count()).FirstOrDefault() ?? Enumerable.Empty<StepGroup>()];

    private static (Complex[] WithFirst, double[] Energy) Overlaps(
        IFrameBlockReader reader, ImmutableArray<StepGroup> trackers, ImmutableArray<double> theta)
    {
        DemodulatedField first = DemodulatedField.Read(reader, trackers[0], FramePhases.Fit(trackers[0], theta));
        var overlaps = new Complex[trackers.Length];
        var energies = new double[trackers.Length];
        for (int k = 0; k < trackers.Length; k++)
        {
            DemodulatedField field = DemodulatedField.Read(reader, trackers[k], FramePhases.Fit(trackers[k], theta));
            overlaps[k] = field.Overlap(first);
            energies[k] = field.Overlap(field).Real;
        }

        return (overlaps, energies);
    }

    private static double[] Unwrap(Complex[] overlaps)
    {
        var phases = new double[overlaps.Length];
        for (int k = 1; k < overlaps.Length; k++)
        {
            phases[k] = phases[k - 1] + (overlaps[k] * Complex.Conjugate(overlaps[k - 1])).Phase;
        }

        return phases;
    }

    private static double Similarity(Complex overlap, double energyA, double energyB) =>
        ((overlap.Real * overlap.Real) + (overlap.Imaginary * overlap.Imaginary)) / (energyA * energyB);
}
