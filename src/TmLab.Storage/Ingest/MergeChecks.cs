using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Ingest;

/// <summary>Whether two recordings were made at the same bench, set up in the same way.</summary>
internal static class MergeChecks
{
    /// <summary>All differences that forbid joining them.</summary>
    /// <param name="first">The first recording.</param>
    /// <param name="second">The second.</param>
    /// <param name="name">The second's name for messages.</param>
    public static ImmutableArray<InputProblem> Check(OpenedMeasurement first, OpenedMeasurement second, string name)
    {
        var problems = new ProblemList(name);
        (MeasurementManifest a, MeasurementManifest b) = (first.Manifest, second.Manifest);
        Compare(problems, "camera", first.Frames.FrameSize, second.Frames.FrameSize);
        Compare(problems, "camera.bit_depth", a.Camera.BitDepth, b.Camera.BitDepth);
        CompareGiven(problems, "camera.electrons_per_count", a.Camera.ElectronsPerCount, b.Camera.ElectronsPerCount);
        CompareGiven(problems, "wavelength_nm", a.WavelengthNm, b.WavelengthNm);
        Compare(problems, "modes", WithoutFiles(a.Modes), WithoutFiles(b.Modes));
        Compare(problems, "modes.patterns", first.CustomPatterns.SequenceEqual(second.CustomPatterns), true);
        Compare(problems, "modulator", WithoutFiles(a.Modulator), WithoutFiles(b.Modulator));
        Compare(problems, "modulator.lut", SameTable(first.PhaseLut, second.PhaseLut), true);
        Compare(problems, "modulator.flatness", first.Flatness.SequenceEqual(second.Flatness), true);
        Compare(problems, "phase_steps.arm", a.SteppedArm, b.SteppedArm);
        Compare(problems, "schedule", first.Schedule.TimesAreMeasured, second.Schedule.TimesAreMeasured);
        CompareSteps(problems, first.Schedule, second.Schedule);
        return problems.ToImmutable();
    }

    private static void Compare<T>(ProblemList problems, string key, T a, T b)
    {
        if (!EqualityComparer<T>.Default.Equals(a, b))
        {
            string found = a is bool ? "it differs between the recordings" : $"{b}, but {a} in the first recording";
            problems.Add(key, found, "join recordings of the same bench only");
        }
    }

    private static void CompareGiven(ProblemList problems, string key, double? a, double? b)
    {
        if (a is not null && b is not null)
        {
            Compare(problems, key, a, b);
        }
    }

    private static ModeDescription WithoutFiles(ModeDescription modes) => modes with { PatternFile = null, PatternDataset = null };

    private static ModulatorDescription? WithoutFiles(ModulatorDescription? panel) =>
        panel is null ? null : panel with { LutFile = null, FlatnessFile = null };

    private static bool SameTable(GrayPhaseTable? a, GrayPhaseTable? b) =>
        a is null || b is null ? a is null && b is null : a.Gray.SequenceEqual(b.Gray) && a.PhaseRad.SequenceEqual(b.PhaseRad);

    /// <summary>A step's number must mean the same phase, or its systematic error could not be found.</summary>
    private static void CompareSteps(ProblemList problems, Schedule first, Schedule second)
    {
        if (!StepPhases(first).SequenceEqual(StepPhases(second)))
        {
            problems.Add("schedule", "the phase steps are not those of the first recording", "record both with the same steps");
        }
    }

    private static IEnumerable<(int Step, double Phase)> StepPhases(Schedule schedule) => schedule.Frames
        .Where(f => f.IsStepped)
        .Select(f => (f.Step, Math.Round(f.PhaseRad / StepChecks.SamePhaseRad)))
        .Distinct()
        .Order();
}
