using TmLab.Matrix;

namespace TmLab.Reconstruction.Drift;

/// <summary>The drift, and what is needed to say how well it is known.</summary>
/// <param name="Facts">The drift.</param>
/// <param name="Phases">The fits inside the groups; null where the simpler ways were taken.</param>
/// <param name="Solver">The smoother, for draws from its posterior; null likewise.</param>
internal sealed record DriftEstimate(DriftFacts Facts, GroupPhases? Phases, DriftPathSolver? Solver);
