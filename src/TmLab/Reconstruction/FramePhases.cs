using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Reconstruction;

/// <summary>The signal's phase relative to the reference in every frame: the commanded step with its sign, the step's error, the drift.</summary>
public static class FramePhases
{
    /// <summary>±δ for every frame, radians: stepping the reference turns the sign. NaN for frames without a step.</summary>
    public static ImmutableArray<double> Commanded(Schedule schedule, SteppedArm arm) =>
        [.. schedule.Frames.Select(f => arm == SteppedArm.Signal ? f.PhaseRad : -f.PhaseRad)];

    /// <summary>θ = ±δ + b + φ for every frame, radians; NaN for frames without a step.</summary>
    public static ImmutableArray<double> Total(Schedule schedule, SteppedArm arm, DriftFacts drift) =>
        [.. Commanded(schedule, arm).Select((delta, f) => delta + StepError(drift, schedule.Frames[f]) + drift.FramePhaseRad[f])];

    /// <summary>The fit of a group; a schedule that passed its checks always has one.</summary>
    /// <exception cref="ArgumentException">The group's phases do not determine the field.</exception>
    public static StepFit Fit(StepGroup group, ImmutableArray<double> totalPhaseRad)
    {
        double[] theta = [.. group.Frames.Select(f => totalPhaseRad[f])];
        return StepFit.TryCreate(theta)
            ?? throw new ArgumentException($"The steps of {group.Role} {group.Mode} do not determine a field.", nameof(group));
    }

    private static double StepError(DriftFacts drift, ScheduledFrame frame) =>
        frame.IsStepped && !drift.StepErrorRad.IsEmpty ? drift.StepErrorRad[frame.Step] : 0;
}
