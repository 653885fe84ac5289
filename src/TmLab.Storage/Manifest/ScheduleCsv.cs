using System.Collections.Immutable;
using System.Globalization;
using System.Text;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>The schedule as CSV: one row a frame, columns <c>frame,role,mode,step,phase_rad</c> and optionally <c>time_s</c>.</summary>
public static class ScheduleCsv
{
    private static readonly string[] Required = ["frame", "role", "mode", "step", "phase_rad"];
    private static readonly string[] Optional = ["time_s"];

    /// <summary>
    /// Reads the rows in the order of the file, unchecked beyond their form. Where the file has no times, TimeS is the row's number.
    /// Mode, step and phase are ignored for roles that have none.
    /// </summary>
    /// <param name="path">Where the file is.</param>
    /// <param name="problems">Takes what is wrong.</param>
    /// <returns>The rows and whether times were given; null when there was any problem.</returns>
    internal static (ImmutableArray<ScheduledFrame> Rows, bool HasTimes)? Read(string path, ProblemList problems)
    {
        if (CsvTable.Read(path, Required, Optional, problems) is not { } table)
        {
            return null;
        }

        bool hasTimes = table.Has("time_s");
        var rows = ImmutableArray.CreateBuilder<ScheduledFrame>(table.RowCount);
        var found = new ProblemList(problems.File);
        for (int row = 0; row < table.RowCount; row++)
        {
            rows.Add(ReadRow(table, row, hasTimes, found));
        }

        problems.AddOfOneKind(found.ToImmutable().Select(p => (p.Place ?? "", p.Found, p.Remedy)));
        return found.IsEmpty ? (rows.MoveToImmutable(), hasTimes) : null;
    }

    /// <summary>Writes a schedule so that reading it gives the same frames; times only where they were measured. Lines end in \n.</summary>
    public static string Write(Schedule schedule)
    {
        var text = new StringBuilder();
        text.Append(string.Join(',', Required)).Append(schedule.TimesAreMeasured ? ",time_s\n" : "\n");
        foreach (ScheduledFrame frame in schedule.Frames)
        {
            AppendRow(text, frame, schedule.TimesAreMeasured);
        }

        return text.ToString();
    }

    private static void AppendRow(StringBuilder text, ScheduledFrame frame, bool hasTimes)
    {
        CultureInfo invariant = CultureInfo.InvariantCulture;
        text.Append(invariant, $"{frame.Index},{ManifestWords.Of(ManifestWords.Roles, frame.Role)},");
        if (frame.IsStepped)
        {
            text.Append(invariant, $"{frame.Mode},{frame.Step},{frame.PhaseRad:R}");
        }
        else
        {
            text.Append(",,");
        }

        if (hasTimes)
        {
            text.Append(invariant, $",{frame.TimeS:R}");
        }

        text.Append('\n');
    }

    private static ScheduledFrame ReadRow(CsvTable table, int row, bool hasTimes, ProblemList problems)
    {
        int index = table.Whole(row, "frame", problems) ?? -1;
        double timeS = hasTimes ? table.Number(row, "time_s", problems) : row;
        FrameRole role = ReadRole(table[row, "role"], row, problems);
        var frame = new ScheduledFrame(index, role, -1, -1, double.NaN, timeS);
        return frame.IsStepped
            ? frame with
            {
                Mode = table.Whole(row, "mode", problems) ?? -1,
                Step = table.Whole(row, "step", problems) ?? -1,
                PhaseRad = table.Number(row, "phase_rad", problems),
            }
            : frame;
    }

    private static FrameRole ReadRole(string word, int row, ProblemList problems)
    {
        int at = Array.FindIndex(ManifestWords.Roles, r => r.Word == word);
        if (at >= 0)
        {
            return ManifestWords.Roles[at].Value;
        }

        IEnumerable<string> words = ManifestWords.Roles.Select(r => r.Word);
        problems.Add(
            $"line {row + 2}, column role", $"unknown role \"{word}\"", $"write one of {string.Join(", ", words)}; \"{NearestName.Of(word, words)}\" is the nearest");
        return FrameRole.Dark;
    }
}
