using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction;

/// <summary>What was found on the way to a matrix, from which it is judged.</summary>
/// <param name="Facts">The measurement, with the schedule that the frames turned out to follow.</param>
/// <param name="Basis">The patterns.</param>
/// <param name="TotalPhaseRad">The phase of every frame.</param>
/// <param name="Weights">The weights of the frames.</param>
/// <param name="Drift">The drift.</param>
/// <param name="Survey">Noise, visibility and saturation of the pixels.</param>
/// <param name="Pixels">Which rows may be used.</param>
/// <param name="RowEnergy">Σ_n |T[p, n]|².</param>
/// <param name="Frames">Frames that do not fit.</param>
/// <param name="OutlyingModes">Columns of far more energy than the others.</param>
internal sealed record MatrixEvidence(
    MeasurementFacts Facts,
    IPatternBasis Basis,
    ImmutableArray<double> TotalPhaseRad,
    FrameWeightTable Weights,
    DriftEstimate Drift,
    PixelSurvey Survey,
    PixelJudgement Pixels,
    double[] RowEnergy,
    ImmutableArray<FrameFinding> Frames,
    ImmutableArray<int> OutlyingModes);
