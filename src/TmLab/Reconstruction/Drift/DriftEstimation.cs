using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>Chooses how the drift is followed and follows it.</summary>
public static class DriftEstimation
{
    private const double SmallestRateShare = 0.01;

    /// <summary>
    /// The way asked for, or the next simpler one that the measurement allows: the smoothed path wants eight groups and usable pixels,
    /// interpolation two trackers.
    /// </summary>
    /// <param name="reader">The counts.</param>
    /// <param name="facts">All else of the measurement.</param>
    /// <param name="settings">The way asked for, pixels, threads.</param>
    /// <param name="cancel">Stops the work.</param>
    public static DriftFacts Run(
        IFrameBlockReader reader, MeasurementFacts facts, ReconstructionSettings settings, CancellationToken cancel) =>
        Estimate(reader, facts, PixelSample.Read(reader, facts, settings), settings, cancel).Facts;

    /// <summary>The same, with what is needed to say how well the drift is known.</summary>
    internal static DriftEstimate Estimate(
        IFrameBlockReader reader, MeasurementFacts facts, PixelSample sample, ReconstructionSettings settings, CancellationToken cancel) =>
        settings.Drift switch
        {
            DriftMethod.None => new DriftEstimate(DriftFacts.None(reader.FrameCount), null, null),
            DriftMethod.TrackersInterpolated => Interpolated(reader, facts),
            _ => Smoothed(facts, sample, settings, cancel) ?? Interpolated(reader, facts),
        };

    private static DriftEstimate Interpolated(IFrameBlockReader reader, MeasurementFacts facts) =>
        new(TrackerDrift.Follow(reader, facts.Schedule, facts.Manifest.SteppedArm), null, null);

    private static DriftEstimate? Smoothed(
        MeasurementFacts facts, PixelSample sample, ReconstructionSettings settings, CancellationToken cancel)
    {
        ImmutableArray<double> commanded = FramePhases.Commanded(facts.Schedule, facts.Manifest.SteppedArm);
        if (GroupPhases.Find(facts.Schedule, commanded, sample, settings, cancel) is not GroupPhases phases)
        {
            return null;
        }

        ImmutableArray<TrackerPin> pins = TrackerPins.Find(facts.Schedule, phases, commanded);
        var solver = new DriftPathSolver(facts.Schedule, phases, commanded, pins);
        double rate = solver.EstimateWalkRate(), inside = solver.WalkRateInsideGroups();
        DriftPath path = solver.Solve(rate);
        var drift = new DriftFacts(
            DriftMethod.SmoothedPath,
            [.. pins.Select(p => p.TimeS)],
            [.. pins.Select(p => p.OffsetRad)],
            [.. pins.Select(p => p.Similarity)],
            path.PhaseRad,
            path.StandardDeviationRad,
            path.StepErrorRad,
            PowerDrift.Gains(facts.Schedule.Frames.Length, phases),
            path.WalkRateRad2PerS)
        {
            Decorrelation = Decorrelation.Fit(phases, pins),
            AmbiguousGaps = AmbiguousGaps.Find(facts.Schedule, phases, commanded, pins, inside),
        };
        if (rate > inside)
        {
            // Drift that is slow but large makes the trackers move more than the groups let expect. The path is safest with the larger rate;
            // what is left between the groups is nearer to the geometric mean of both.
            solver.Solve(Math.Sqrt(rate * Math.Max(inside, SmallestRateShare * rate)));
        }

        return new DriftEstimate(drift, phases, solver);
    }
}
