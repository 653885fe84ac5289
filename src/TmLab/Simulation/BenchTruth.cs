using System.Collections.Immutable;
using TmLab.Numerics.Matrices;

namespace TmLab.Simulation;

/// <summary>What a measurement on the virtual bench should find. Everything per frame is by place in the file, so faults are followed.</summary>
/// <param name="Matrix">
/// The transmission matrix at the start (pixel × mode, macro-pixel basis), √photoelectrons a frame for unit amplitude on a
/// macro-pixel. Disposed of with the bench.
/// </param>
/// <param name="ReferenceField">The reference on each pixel, √photoelectrons.</param>
/// <param name="MatrixPerTransmission">Matrix elements over the medium's own (for a slab: over the lossless slab's amplitude transmission).</param>
/// <param name="DriftPhaseRad">Phase of the signal arm relative to the reference in each frame, without the steps.</param>
/// <param name="StepPhaseRad">The phase step that each frame really had, of the arm that is stepped; NaN where the role has none.</param>
/// <param name="Power">Laser power in each frame; 1 at the start.</param>
/// <param name="FieldCorrelation">e^{−t/τ} of each frame: how much of the starting matrix is left.</param>
/// <param name="SourceFrame">The scheduled number of the frame that stands at each place.</param>
/// <param name="DeadPixels">Pixels that see no light, ascending.</param>
/// <param name="HotPixels">Pixels that stand at full scale, ascending.</param>
public sealed record BenchTruth(
    ComplexMatrix Matrix,
    ImmutableArray<Complex64> ReferenceField,
    double MatrixPerTransmission,
    ImmutableArray<double> DriftPhaseRad,
    ImmutableArray<double> StepPhaseRad,
    ImmutableArray<double> Power,
    ImmutableArray<double> FieldCorrelation,
    ImmutableArray<int> SourceFrame,
    ImmutableArray<int> DeadPixels,
    ImmutableArray<int> HotPixels);
