using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Planning;

/// <summary>What carries the phase steps.</summary>
public enum StepDevice
{
    /// <summary>The panel itself adds the step to every macro-pixel: one image a pattern and step.</summary>
    Panel,

    /// <summary>Another device in the signal arm: one image a pattern.</summary>
    SignalArm,

    /// <summary>A device in the reference arm: one image a pattern.</summary>
    ReferenceArm,
}

/// <summary>The camera of a plan, in the terms of the linear model of EMVA standard 1288.</summary>
/// <param name="Size">Frame size, pixels.</param>
/// <param name="BitDepth">Bits a pixel, 1 … 16.</param>
/// <param name="ElectronsPerCount">1/K of the standard, photoelectrons a count.</param>
/// <param name="ReadNoiseElectrons">σ_d, photoelectrons r.m.s.</param>
/// <param name="FullWellElectrons">Photoelectrons at which a pixel is full.</param>
/// <param name="OffsetCounts">Counts in darkness.</param>
public sealed record PlannedCamera(
    ImageSize Size, int BitDepth, double ElectronsPerCount, double ReadNoiseElectrons, double FullWellElectrons, double OffsetCounts)
{
    /// <summary>Photoelectrons from which on a pixel is saturated: the full well or the end of the counts, whichever comes first.</summary>
    public double SaturationElectrons =>
        Math.Min(FullWellElectrons, ((1 << BitDepth) - 1 - OffsetCounts) * ElectronsPerCount);
}

/// <summary>Everything that a plan is made from; the defaults stand here and nowhere else. Immutable.</summary>
public sealed record PlanSettings
{
    /// <summary>A line for people; null for none.</summary>
    public string? Title { get; init; }

    /// <summary>Vacuum wavelength, nanometres; null when not given.</summary>
    public double? WavelengthNm { get; init; }

    /// <summary>The patterns and the grid.</summary>
    public ModeDescription Modes { get; init; } = new(BasisKind.Hadamard, HadamardOrdering.Natural, 256, new GridShape(16, 16), null, null);

    /// <summary>Pattern matrix B (K × N, row-major) for custom patterns; empty otherwise.</summary>
    public ImmutableArray<Complex> CustomPatterns { get; init; } = [];

    /// <summary>The panel.</summary>
    public ModulatorDescription Modulator { get; init; } = new(
        ModulatorKind.Phase, new ImageSize(512, 512), new PixelRectangle(0, 0, 512, 512), null, null, null);

    /// <summary>The panel's grey-to-phase table; null when grey is proportional to phase.</summary>
    public GrayPhaseTable? PhaseLut { get; init; }

    /// <summary>The panel's flatness image, native size; empty for none.</summary>
    public ImmutableArray<byte> Flatness { get; init; } = [];

    /// <summary>Number of equal phase steps, at least 3.</summary>
    public int Steps { get; init; } = 4;

    /// <summary>What carries the phase steps.</summary>
    public StepDevice StepDevice { get; init; } = StepDevice.Panel;

    /// <summary>The camera.</summary>
    public PlannedCamera Camera { get; init; } = new(new ImageSize(64, 64), 12, 7.5, 1.6, 30_000, 64);

    /// <summary>Mean signal without reference, photoelectrons a pixel a frame, all macro-pixels on at random phases.</summary>
    public double SignalElectrons { get; init; } = 1000;

    /// <summary>Mean reference without signal, photoelectrons a pixel a frame.</summary>
    public double ReferenceElectrons { get; init; } = 4000;

    /// <summary>Frames a second.</summary>
    public double FrameRateHz { get; init; } = 100;

    /// <summary>Expected drift: a random walk of this many radians r.m.s. in one second.</summary>
    public double DriftRadPerSqrtSecond { get; init; } = 0.3;

    /// <summary>The sample's decorrelation time τ, seconds: its field correlates with that at the start as e^{−t/τ}; infinite for a sample at rest.</summary>
    public double DecorrelationTimeS { get; init; } = double.PositiveInfinity;

    /// <summary>The pattern that is shown again and again.</summary>
    public int TrackerPattern { get; init; }

    /// <summary>A tracker before every so many modes; null leaves the choice to the plan.</summary>
    public int? TrackerEveryModes { get; init; }

    /// <summary>Dark frames at the start.</summary>
    public int DarkFrames { get; init; } = 8;

    /// <summary>Reference frames (signal arm blocked).</summary>
    public int ReferenceFrames { get; init; } = 4;

    /// <summary>Blank frames (reference arm blocked).</summary>
    public int BlankFrames { get; init; } = 4;

    /// <summary>The patterns to measure, for a repair; empty for all.</summary>
    public ImmutableArray<int> RepairPatterns { get; init; } = [];

    /// <summary>The arm that carries the steps.</summary>
    public SteppedArm SteppedArm => StepDevice == StepDevice.ReferenceArm ? SteppedArm.Reference : SteppedArm.Signal;

    /// <summary>The frames, with a tracker before every so many modes.</summary>
    public Schedule BuildSchedule(int trackerEveryModes) => ScheduleBuilder.Build(new ScheduleSettings
    {
        PatternCount = Modes.PatternCount,
        Patterns = RepairPatterns,
        Steps = Steps,
        TrackerPattern = TrackerPattern,
        TrackerEveryModes = trackerEveryModes,
        DarkFrames = DarkFrames,
        ReferenceFrames = ReferenceFrames,
        BlankFrames = BlankFrames,
        FrameRateHz = FrameRateHz,
    });

    /// <summary>Number of patterns that are measured as modes.</summary>
    public int MeasuredPatterns => RepairPatterns.IsEmpty ? Modes.PatternCount : RepairPatterns.Length;
}
