using TmLab.Planning;

namespace TmLab.Cli.Stages;

/// <summary>A plan that was written.</summary>
/// <param name="Plan">The plan.</param>
/// <param name="ImageCount">Number of images.</param>
internal sealed record PlanOutcome(MeasurementPlan Plan, int ImageCount);
