using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Ingest;

/// <summary>
/// Two recordings at the same bench as one measurement: the second shows patterns that the first lacks, or shows some again, whose
/// frames in the first are then left out. Where the second's clock goes on from the first's the times stay; otherwise the second is
/// put behind the first, and trackers of the same pattern at the seam tie the phases.
/// </summary>
public static class MergedMeasurement
{
    /// <summary>
    /// Time between the recordings where nobody knows it, in frame intervals: long enough for the phase to have moved by anything,
    /// short enough to carry the drift's branch of 2π across.
    /// </summary>
    private const double SeamFrames = 100;

    /// <summary>Opens and joins two measurement folders.</summary>
    /// <param name="firstFolder">The recording whose manifest counts.</param>
    /// <param name="secondFolder">The recording that fills in.</param>
    /// <exception cref="BadInputException">Either is not sound, or they do not fit; it carries every problem found.</exception>
    public static OpenedMeasurement Open(string firstFolder, string secondFolder)
    {
        OpenedMeasurement first = MeasurementFolder.OpenPart(firstFolder);
        OpenedMeasurement? second = null;
        try
        {
            second = MeasurementFolder.OpenPart(secondFolder);
            ImmutableArray<InputProblem> misfits = MergeChecks.Check(first, second, secondFolder);
            return misfits.IsEmpty ? Join(first, second, secondFolder) : throw new BadInputException(misfits);
        }
        catch
        {
            first.Dispose();
            second?.Dispose();
            throw;
        }
    }

    private static OpenedMeasurement Join(OpenedMeasurement first, OpenedMeasurement second, string secondName)
    {
        HashSet<int> again = [.. second.Schedule.Modes.Select(g => g.Mode)];
        bool[] keep = [.. first.Schedule.Frames.Select(f => f.Role != FrameRole.Mode || !again.Contains(f.Mode))];
        ImmutableArray<ScheduledFrame> kept = [.. first.Schedule.Frames.Where(f => keep[f.Index])];
        double shift = ClockGoesOn(first.Schedule, second.Schedule) ? 0 : Shift(first.Schedule, second.Schedule);
        if (shift != 0)
        {
            RequireTrackersAtSeam(kept, second.Schedule.Frames, secondName);
        }

        ImmutableArray<ScheduledFrame> rows =
        [
            .. kept.Concat(second.Schedule.Frames.Select(f => f with { TimeS = f.TimeS + shift })).Select((f, i) => f with { Index = i }),
        ];
        ImmutableArray<InputProblem> problems = ScheduleChecks.Check(rows, first.Manifest.Modes, $"{first.FramesName} and {secondName} together");
        return problems.IsEmpty
            ? first with
            {
                Schedule = new Schedule(rows, first.Schedule.TimesAreMeasured),
                Frames = new MergedFrames(first.Frames, keep, second.Frames),
            }
            : throw new BadInputException(problems);
    }

    private static bool ClockGoesOn(Schedule first, Schedule second) =>
        first.TimesAreMeasured && second.Frames[0].TimeS > first.Frames[^1].TimeS;

    private static double Shift(Schedule first, Schedule second)
    {
        double span = first.Frames[^1].TimeS - first.Frames[0].TimeS;
        double interval = first.Frames.Length > 1 ? span / (first.Frames.Length - 1) : 1;
        return first.Frames[^1].TimeS + (SeamFrames * interval) - second.Frames[0].TimeS;
    }

    private static void RequireTrackersAtSeam(
        ImmutableArray<ScheduledFrame> first, ImmutableArray<ScheduledFrame> second, string secondName)
    {
        ScheduledFrame last = first.LastOrDefault(f => f.IsStepped);
        ScheduledFrame next = second.FirstOrDefault(f => f.IsStepped);
        if (last.Role != FrameRole.Tracker || next.Role != FrameRole.Tracker || last.Mode != next.Mode)
        {
            throw new BadInputException(
                secondName, null, "no tracker of the same pattern ends the first recording and begins the second, so the phase between them cannot be known",
                "record one there, or give times of one clock in both schedules");
        }
    }
}
