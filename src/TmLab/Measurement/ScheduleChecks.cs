using System.Collections.Immutable;
using TmLab.Failures;

namespace TmLab.Measurement;

/// <summary>Checks of a schedule before anything is computed from it. Each returns all that it finds.</summary>
public static class ScheduleChecks
{
    /// <summary>All checks of the rows themselves, in the order in which a user would mend them.</summary>
    /// <param name="rows">The rows in the order of the file.</param>
    /// <param name="modes">The patterns that the rows may name.</param>
    /// <param name="file">The file's name for messages.</param>
    /// <param name="needsAllModes">Whether every pattern must have been shown; a part of a measurement shows some of them.</param>
    public static ImmutableArray<InputProblem> Check(
        ImmutableArray<ScheduledFrame> rows, ModeDescription modes, string file, bool needsAllModes = true)
    {
        var problems = new ProblemList(file);
        problems.Add(FrameNumbers(rows, file));
        problems.Add(Times(rows, file));
        problems.Add(ModeNumbers(rows, modes, file, needsAllModes));
        problems.Add(StepChecks.Check(rows, file));
        return problems.ToImmutable();
    }

    /// <summary>Whether there is one row for each frame.</summary>
    public static ImmutableArray<InputProblem> FrameCount(long rowCount, long frameCount, string scheduleFile, string framesFile) =>
        rowCount == frameCount
            ? []
            : [new InputProblem(
                scheduleFile, null, $"the schedule has {rowCount} rows, but {framesFile} holds {frameCount} frames",
                "write one row for each frame")];

    /// <summary>Whether the frames are numbered 0, 1, 2 … in order.</summary>
    public static ImmutableArray<InputProblem> FrameNumbers(ImmutableArray<ScheduledFrame> rows, string file)
    {
        var problems = new ProblemList(file);
        var seen = new HashSet<int>();
        problems.AddOfOneKind(rows
            .Select((row, i) => (row.Index, Place: RowPlace(i), IsNew: seen.Add(row.Index)))
            .Where(r => !r.IsNew)
            .Select(r => (r.Place, $"frame {r.Index} appears a second time", "number the frames 0, 1, 2 … once each")));
        if (problems.IsEmpty)
        {
            AddFirstOutOfOrder(rows, problems);
        }

        return problems.ToImmutable();
    }

    /// <summary>Whether the times are finite and rise from row to row.</summary>
    public static ImmutableArray<InputProblem> Times(ImmutableArray<ScheduledFrame> rows, string file)
    {
        var problems = new ProblemList(file);
        problems.AddOfOneKind(Enumerable.Range(0, rows.Length)
            .Where(i => !double.IsFinite(rows[i].TimeS) || (i > 0 && rows[i].TimeS <= rows[i - 1].TimeS))
            .Select(i => (RowPlace(i), TimeComplaint(rows, i), "give rising times in seconds, or leave time_s out")));
        return problems.ToImmutable();
    }

    /// <summary>Whether every pattern index lies in 0 … K−1 and, where all are needed, every one of them was shown as a mode.</summary>
    public static ImmutableArray<InputProblem> ModeNumbers(
        ImmutableArray<ScheduledFrame> rows, ModeDescription modes, string file, bool needsAllModes = true)
    {
        var problems = new ProblemList(file);
        problems.AddOfOneKind(rows
            .Select((row, i) => (Row: row, Place: RowPlace(i)))
            .Where(r => r.Row.IsStepped && (r.Row.Mode < 0 || r.Row.Mode >= modes.PatternCount))
            .Select(r => (
                r.Place, $"mode {r.Row.Mode} lies outside 0 … {modes.PatternCount - 1}", "correct the mode or modes.count in the manifest")));
        if (needsAllModes)
        {
            AddMissingModes(rows, modes.PatternCount, problems);
        }

        return problems.ToImmutable();
    }

    /// <summary>The place of a row in messages: its line in the CSV file, whose header is line 1.</summary>
    internal static string RowPlace(int row) => $"line {row + 2}";

    private static void AddMissingModes(ImmutableArray<ScheduledFrame> rows, int patternCount, ProblemList problems)
    {
        HashSet<int> shown = [.. rows.Where(r => r.Role == FrameRole.Mode).Select(r => r.Mode)];
        int shownInRange = shown.Count(m => m >= 0 && m < patternCount);
        if (shownInRange < patternCount)
        {
            IEnumerable<int> missing = Enumerable.Range(0, patternCount).Where(m => !shown.Contains(m)).Take(ProblemList.ListedOfOneKind);
            string more = patternCount - shownInRange > ProblemList.ListedOfOneKind ? " …" : "";
            problems.Add(
                null, $"{patternCount - shownInRange} of {patternCount} modes have no frames: {string.Join(", ", missing)}{more}",
                "record every mode, or correct modes.count in the manifest");
        }
    }

    private static void AddFirstOutOfOrder(ImmutableArray<ScheduledFrame> rows, ProblemList problems)
    {
        for (int i = 0; i < rows.Length; i++)
        {
            if (rows[i].Index != i)
            {
                problems.Add(
                    RowPlace(i), $"frame {rows[i].Index} stands where frame {i} belongs", "sort the rows by frame and number them 0, 1, 2 …");
                return;
            }
        }
    }

    private static string TimeComplaint(ImmutableArray<ScheduledFrame> rows, int i) =>
        double.IsFinite(rows[i].TimeS)
            ? FormattableString.Invariant($"time {rows[i].TimeS} s does not lie after the {rows[i - 1].TimeS} s of the row before")
            : "the time is not a finite number";
}
