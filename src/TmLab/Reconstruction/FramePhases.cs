using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Reconstruction;

/// <summary>The signal's phase relative to the reference in every frame: the commanded step, with its sign, plus the drift.</summary>
public static class FramePhases
{
    /// <summary>θ = ±δ + φ for every frame, radians; NaN for frames without a step.</summary>
    /// <param name="schedule">The frames.</param>
    /// <param name="arm">Which arm was stepped: stepping the reference turns the sign of δ.</param>
    /// <param name="driftRad">φ, one entry a frame.</param>
    public static ImmutableArray<double> Total(Schedule schedule, SteppedArm arm, ImmutableArray<double> driftRad)
    {
        double sign = arm == SteppedArm.Signal ? 1 : -1;
        return [.. schedule.Frames.Select(f => (sign * f.PhaseRad) + driftRad[f.Index])];
    }

    /// <summary>The fit of a group; a schedule that passed its checks always has one.</summary>
    /// <exception cref="ArgumentException">The group's phases do not determine the field.</exception>
    public static StepFit Fit(StepGroup group, ImmutableArray<double> totalPhaseRad)
    {
        double[] theta = [.. group.Frames.Select(f => totalPhaseRad[f])];
        return StepFit.TryCreate(theta)
            ?? throw new ArgumentException($"The steps of {group.Role} {group.Mode} do not determine a field.", nameof(group));
    }
}
