using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;

namespace TmLab.Planning;

/// <summary>A planned measurement: what to record, and what it should be worth. Immutable.</summary>
/// <param name="Settings">What it was made from.</param>
/// <param name="Manifest">The content of <c>measurement.json</c>.</param>
/// <param name="Schedule">The frames in order of recording.</param>
/// <param name="Spacing">How often the tracked pattern is shown, and why.</param>
/// <param name="Budget">Predicted fidelity and its parts.</param>
/// <param name="Variations">What changed settings would do.</param>
/// <param name="Warnings">What a careful user should know, one sentence each.</param>
public sealed record MeasurementPlan(
    PlanSettings Settings,
    MeasurementManifest Manifest,
    Schedule Schedule,
    TrackerSpacing Spacing,
    PlannedBudget Budget,
    ImmutableArray<PlanVariation> Variations,
    ImmutableArray<string> Warnings)
{
    /// <summary>The frames' file name in the measurement folder.</summary>
    public const string FramesFile = "frames.raw";

    /// <summary>The schedule's file name in the measurement folder.</summary>
    public const string ScheduleFile = "schedule.csv";

    /// <summary>The custom patterns' file name in the measurement folder.</summary>
    public const string PatternFile = "patterns.npy";

    /// <summary>The grey-to-phase table's file name in the measurement folder.</summary>
    public const string LutFile = "lut.csv";

    /// <summary>The flatness image's file name in the measurement folder.</summary>
    public const string FlatnessFile = "flatness.png";

    private const double SaturationWarning = 1e-3;

    // Below it the phases of the frames are lost in the noise now and then, which the error budget does not model.
    private const double FaintSignalToNoise = 5;

    /// <summary>Size of the frames on disk, bytes.</summary>
    public long FrameBytes => (long)Schedule.Frames.Length * Settings.Camera.Size.PixelCount * (Manifest.Frames.Pixel == RawPixelFormat.UInt8 ? 1 : 2);

    /// <summary>Duration of the recording, seconds.</summary>
    public double DurationS => Schedule.Frames.Length / Settings.FrameRateHz;

    /// <summary>Makes a plan.</summary>
    /// <exception cref="BadInputException">The patterns do not suit the grid, the panel or each other; it carries all problems.</exception>
    /// <exception cref="ArgumentException">A number is out of range.</exception>
    public static MeasurementPlan Make(PlanSettings settings)
    {
        PlanChecks.Check(settings);
        var model = new BudgetModel(settings);
        TrackerSpacing spacing = TrackerSpacing.Choose(settings, model);
        Schedule schedule = settings.BuildSchedule(spacing.EveryModes);
        PlannedBudget budget = model.Of(schedule);
        return new MeasurementPlan(
            settings,
            ManifestOf(settings),
            schedule,
            spacing,
            budget,
            PlanVariation.All(settings, spacing.EveryModes, model, budget),
            [.. WarningsOf(settings, spacing, budget)]);
    }

    private static MeasurementManifest ManifestOf(PlanSettings settings) => new(
        settings.Title,
        settings.WavelengthNm,
        new CameraDescription(
            settings.Camera.Size, settings.Camera.BitDepth, null, settings.Camera.ElectronsPerCount, settings.Camera.ReadNoiseElectrons),
        new FrameLocation(
            FrameStorageKind.Raw, [FramesFile], null,
            settings.Camera.BitDepth <= 8 ? RawPixelFormat.UInt8 : RawPixelFormat.UInt16LittleEndian, 0),
        new ScheduleLocation(ScheduleFile, null, 0),
        settings.Modes with { PatternFile = settings.Modes.Basis == BasisKind.Custom ? PatternFile : null, PatternDataset = null },
        settings.Modulator with
        {
            LutFile = settings.PhaseLut is null ? null : LutFile,
            FlatnessFile = settings.Flatness.IsEmpty ? null : FlatnessFile,
        },
        settings.SteppedArm,
        null,
        null);

    private static IEnumerable<string> WarningsOf(PlanSettings settings, TrackerSpacing spacing, PlannedBudget budget)
    {
        if (spacing.IsAmbiguous)
        {
            yield return spacing.EveryModes == 0
                ? "Without trackers the drift from mode to mode cannot be known. Leave the spacing to the plan."
                : FormattableString.Invariant($"The phase may move by {budget.TrackerGapRad:F1} rad (4 sigma) from one tracker to the next and be unwrapped wrongly. Record faster, or steady the bench.");
        }

        if (budget.SaturatedShare > SaturationWarning)
        {
            yield return FormattableString.Invariant($"{100 * budget.SaturatedShare:G2} % of the pixels saturate in a frame of full signal. Use less light, or a darker reference.");
        }

        if (settings.Steps == StepChecks.FewestSteps)
        {
            yield return "With three steps neither noise nor steps can be checked from the frames themselves. Four or more are better.";
        }

        if (settings.DarkFrames == 0)
        {
            yield return "Without dark frames a changing laser power leaves a share of the dark level in the matrix.";
        }

        if (budget.SignalToNoise < FaintSignalToNoise)
        {
            yield return FormattableString.Invariant($"Signal to noise is {budget.SignalToNoise:G2}: so faint a signal makes the prediction itself optimistic by some hundredths. Use more light or more steps.");
        }
    }
}
