using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Storage.StageFiles;

namespace TmLab.Storage.Plans;

/// <summary>
/// What a repair measures again: the patterns that a matrix file marks as lost, shown as in the measurement it was made from.
/// </summary>
public static class RepairSource
{
    /// <summary>Settings for a repair.</summary>
    /// <param name="matrixFile">The matrix file.</param>
    /// <param name="measurementFile">The measurement file it was made from; null to take the one that it names.</param>
    /// <param name="expected">Light levels, drift, rates and all else that files do not say.</param>
    /// <exception cref="BadInputException">Nothing was lost, a file is damaged, or the two files do not belong together.</exception>
    public static PlanSettings Load(string matrixFile, string? measurementFile, PlanSettings expected)
    {
        using var matrix = new MatrixFileReader(matrixFile);
        string parent = measurementFile ?? FindParent(matrixFile, matrix);
        using var measurement = new MeasurementFileReader(parent);
        MeasurementFacts facts = measurement.Facts;
        ImmutableArray<int> lost = Lost(matrix.Facts.Quality.LostPatterns, facts.Manifest.Modes, matrixFile);
        return WithBench(facts, parent, expected) with { RepairPatterns = lost };
    }

    private static string FindParent(string matrixFile, MatrixFileReader matrix)
    {
        string name = matrix.Provenance.Parents.IsEmpty ? "" : matrix.Provenance.Parents[0].File;
        string beside = Path.Combine(Path.GetDirectoryName(matrixFile) ?? "", Path.GetFileName(name));
        return name.Length > 0 && File.Exists(name) ? name
            : name.Length > 0 && File.Exists(beside) ? beside
            : throw new BadInputException(
                matrixFile, "parent_file", $"the measurement file \"{name}\" that the matrix was made from is not found", "name it with --measurement");
    }

    private static ImmutableArray<int> Lost(ImmutableArray<int> lost, ModeDescription modes, string file)
    {
        if (lost.IsEmpty)
        {
            throw new BadInputException(
                file, "/quality/lost_patterns", "no pattern was lost, so there is nothing to repair", "use the matrix as it is");
        }

        return lost.Max() < modes.PatternCount
            ? lost
            : throw new BadInputException(
                file,
                "/quality/lost_patterns",
                $"pattern {lost.Max()} was lost, the measurement has {modes.PatternCount}",
                "name the measurement that it was made from");
    }

    private static PlanSettings WithBench(MeasurementFacts facts, string file, PlanSettings expected)
    {
        MeasurementManifest manifest = facts.Manifest;
        CameraDescription camera = manifest.Camera;
        Schedule schedule = facts.Schedule;
        return expected with
        {
            Title = manifest.Title,
            WavelengthNm = manifest.WavelengthNm,
            Modes = manifest.Modes,
            CustomPatterns = facts.CustomPatterns,
            Modulator = manifest.Modulator
                ?? throw new BadInputException(file, "modulator", "the measurement does not say what the modulator is", "plan without --repair"),
            PhaseLut = facts.PhaseLut,
            Flatness = facts.Flatness,
            Steps = EqualSteps(schedule, file),
            StepDevice = DeviceOf(manifest, expected.StepDevice),
            Camera = expected.Camera with
            {
                Size = facts.FrameSize,
                BitDepth = camera.BitDepth,
                ElectronsPerCount = camera.ElectronsPerCount ?? expected.Camera.ElectronsPerCount,
                ReadNoiseElectrons = camera.ReadNoiseElectrons ?? expected.Camera.ReadNoiseElectrons,
            },
            TrackerPattern = schedule.Trackers.GroupBy(t => t.Mode).OrderByDescending(g => g.Count()).FirstOrDefault()?.Key ?? expected.TrackerPattern,
            FrameRateHz = RateOf(schedule) ?? expected.FrameRateHz,
        };
    }

    private static int EqualSteps(Schedule schedule, string file)
    {
        ScheduledFrame[] stepped = [.. schedule.Frames.Where(f => f.IsStepped)];
        int steps = stepped.Max(f => f.Step) + 1;
        bool isEqual = stepped.All(f =>
            Math.Abs(Math.IEEERemainder(f.PhaseRad - (2 * Math.PI * f.Step / steps), 2 * Math.PI)) < StepChecks.SamePhaseRad);
        return isEqual
            ? steps
            : throw new BadInputException(file, "/frames/phase_rad", "the phase steps are not equal steps of one turn, which are all that is planned", "write the schedule of the repair by hand");
    }

    private static StepDevice DeviceOf(MeasurementManifest manifest, StepDevice asked) => manifest.SteppedArm == SteppedArm.Reference
        ? StepDevice.ReferenceArm
        : asked == StepDevice.Panel && manifest.Modulator?.Kind == ModulatorKind.Phase ? StepDevice.Panel : StepDevice.SignalArm;

    private static double? RateOf(Schedule schedule) => schedule is { TimesAreMeasured: true, Frames.Length: > 1 }
        ? (schedule.Frames.Length - 1) / (schedule.Frames[^1].TimeS - schedule.Frames[0].TimeS)
        : null;
}
