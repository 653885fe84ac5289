using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Matrix;

/// <summary>
/// Everything known of a reconstructed transmission matrix besides its elements: what each row and column is and how far to
/// trust it, and the geometry needed to make a mask. Immutable.
/// </summary>
/// <param name="Title">The measurement's title; null when it has none.</param>
/// <param name="WavelengthNm">Vacuum wavelength, nanometres; null when unknown.</param>
/// <param name="CameraRegion">Size of the camera region; rows are its pixels, row-major.</param>
/// <param name="Grid">The macro-pixel grid; columns are its macro-pixels, row-major.</param>
/// <param name="Modulator">The panel; null when unknown.</param>
/// <param name="PhaseLut">The panel's grey-to-phase table; null when grey is proportional to phase.</param>
/// <param name="Flatness">The panel's flatness image, 8-bit, native size, row-major; empty when not given.</param>
/// <param name="Pixels">One entry a row.</param>
/// <param name="Modes">One entry a column.</param>
/// <param name="Drift">The phase drift that was found and removed.</param>
/// <param name="Quality">Figures on how far to trust the whole.</param>
public sealed record TransmissionMatrixFacts(
    string? Title,
    double? WavelengthNm,
    ImageSize CameraRegion,
    GridShape Grid,
    ModulatorDescription? Modulator,
    GrayPhaseTable? PhaseLut,
    ImmutableArray<byte> Flatness,
    PixelFacts Pixels,
    ModeFacts Modes,
    DriftFacts Drift,
    MatrixQuality Quality);

/// <summary>Facts on the rows, arrays of one entry a pixel.</summary>
/// <param name="Y">Camera row of each pixel.</param>
/// <param name="X">Camera column of each pixel.</param>
/// <param name="Valid">Whether the row may be used.</param>
/// <param name="Visibility">Mean modulation depth 2|D|/a of the fringes, 0 … 1 in a good measurement.</param>
/// <param name="NoiseRms">R.m.s. noise of one element of the row, in the matrix' unit; NaN where it cannot be known.</param>
public sealed record PixelFacts(
    ImmutableArray<int> Y,
    ImmutableArray<int> X,
    ImmutableArray<bool> Valid,
    ImmutableArray<float> Visibility,
    ImmutableArray<float> NoiseRms)
{
    /// <summary>Why a row may not be used, one entry a pixel; empty where it is not known.</summary>
    public ImmutableArray<PixelReason> Reason { get; init; } = [];
}

/// <summary>Facts on the columns, arrays of one entry a macro-pixel.</summary>
/// <param name="Valid">Whether the column may be used.</param>
/// <param name="NoiseRms">R.m.s. noise of one element of the column, in the matrix' unit; NaN where it cannot be known.</param>
public sealed record ModeFacts(ImmutableArray<bool> Valid, ImmutableArray<float> NoiseRms);

/// <summary>How the drift was followed.</summary>
public enum DriftMethod
{
    /// <summary>Nothing was removed.</summary>
    None,

    /// <summary>Tracker phases, unwrapped and interpolated in time.</summary>
    TrackersInterpolated,

    /// <summary>The phases of the frames inside every mode, joined by a smoother; trackers, where there are any, pin the path.</summary>
    SmoothedPath,
}

/// <summary>The phase drift that was found and removed, and what else was found of the frames. Frame arrays have one entry a frame.</summary>
/// <param name="Method">How it was followed.</param>
/// <param name="TrackerTimeS">Mean time of each showing of the tracked pattern, seconds.</param>
/// <param name="TrackerPhaseRad">Unwrapped phase of each showing relative to the first, radians.</param>
/// <param name="TrackerOverlap">|⟨D_0, D_k⟩|²/(⟨D_0,D_0⟩⟨D_k,D_k⟩) of each showing with the first: 1 when nothing but phase changed.</param>
/// <param name="FramePhaseRad">The drift φ removed from each frame, radians.</param>
/// <param name="FramePhaseSdRad">Its standard deviation; NaN where it is not known.</param>
/// <param name="StepErrorRad">Systematic error of each phase step s, radians of the signal's phase; the first is zero by definition. Removed too. Empty where not looked for.</param>
/// <param name="FrameGain">Laser power of each frame relative to the mean; 1 where not looked for or not significant. Divided out.</param>
/// <param name="WalkRateRad2PerS">Variance rate of the phase's random walk, rad²/s; NaN where not known.</param>
public sealed record DriftFacts(
    DriftMethod Method,
    ImmutableArray<double> TrackerTimeS,
    ImmutableArray<double> TrackerPhaseRad,
    ImmutableArray<double> TrackerOverlap,
    ImmutableArray<double> FramePhaseRad,
    ImmutableArray<double> FramePhaseSdRad,
    ImmutableArray<double> StepErrorRad,
    ImmutableArray<double> FrameGain,
    double WalkRateRad2PerS)
{
    /// <summary>No drift looked for or found: phases zero, powers one.</summary>
    /// <param name="frames">Number of frames.</param>
    public static DriftFacts None(int frames) => new(
        DriftMethod.None,
        [],
        [],
        [],
        [.. new double[frames]],
        [.. Enumerable.Repeat(double.NaN, frames)],
        [],
        [.. Enumerable.Repeat(1.0, frames)],
        double.NaN);

    /// <summary>The change of the sample, from the trackers' overlap.</summary>
    public DecorrelationFacts Decorrelation { get; init; } = DecorrelationFacts.Unknown;

    /// <summary>
    /// Numbers k of the gaps, from tracker k to tracker k + 1, over which the phase may have been unwrapped to a wrong multiple of 2π.
    /// </summary>
    public ImmutableArray<int> AmbiguousGaps { get; init; } = [];

    /// <summary>Largest phase change between one tracker and the next, radians; 0 with fewer than two.</summary>
    public double LargestGapRad =>
        TrackerPhaseRad.Zip(TrackerPhaseRad.Skip(1), (a, b) => Math.Abs(b - a)).DefaultIfEmpty(0).Max();
}

/// <summary>Figures on how far to trust a matrix.</summary>
/// <param name="MeanVisibility">Mean of the valid pixels' visibility.</param>
/// <param name="SignalToNoise">Mean |t|² over mean noise² of the valid rows; NaN where noise cannot be known (three steps).</param>
/// <param name="ValidPixels">Number of valid rows.</param>
/// <param name="ValidModes">Number of valid columns.</param>
/// <param name="RowsNormalised">Whether rows were divided by √(reference intensity).</param>
/// <param name="Warnings">What a careful user should know, one sentence each.</param>
public sealed record MatrixQuality(
    double MeanVisibility,
    double SignalToNoise,
    int ValidPixels,
    int ValidModes,
    bool RowsNormalised,
    ImmutableArray<string> Warnings)
{
    /// <summary>Frames that do not fit, named.</summary>
    public ImmutableArray<FrameFinding> Frames { get; init; } = [];

    /// <summary>Patterns without a usable showing, rising.</summary>
    public ImmutableArray<int> LostPatterns { get; init; } = [];

    /// <summary>Columns whose energy is far above the others', rising: light that the modulator does not modulate.</summary>
    public ImmutableArray<int> OutlyingModes { get; init; } = [];

    /// <summary>The fidelity to expect, and what it is lost to.</summary>
    public ErrorBudget Budget { get; init; } = ErrorBudget.Unknown;
}
