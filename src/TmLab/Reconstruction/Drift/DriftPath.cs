using System.Collections.Immutable;

namespace TmLab.Reconstruction.Drift;

/// <summary>A drift path with its uncertainty.</summary>
/// <param name="PhaseRad">φ at every frame, radians.</param>
/// <param name="StandardDeviationRad">Its standard deviation.</param>
/// <param name="StepErrorRad">Systematic error of each phase step, the first zero by definition, radians.</param>
/// <param name="WalkRateRad2PerS">Variance rate of the random walk that was assumed, rad²/s.</param>
internal sealed record DriftPath(
    ImmutableArray<double> PhaseRad, ImmutableArray<double> StandardDeviationRad, ImmutableArray<double> StepErrorRad, double WalkRateRad2PerS);
