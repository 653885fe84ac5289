using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>What a medium must know of its two sides.</summary>
/// <param name="Grid">The macro-pixels.</param>
/// <param name="Pupil">The pupil on the way to the camera.</param>
internal sealed record MediumShape(GridShape Grid, Pupil Pupil);
