using System.Globalization;
using System.Text;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>A modulator's calibration as CSV with the columns <c>gray,phase_rad</c>.</summary>
internal static class PhaseLutCsv
{
    private static readonly string[] Columns = ["gray", "phase_rad"];

    /// <summary>Reads and checks a table; null with problems when it cannot be used.</summary>
    public static GrayPhaseTable? Read(string path, ProblemList problems)
    {
        if (CsvTable.Read(path, Columns, [], problems) is not { } table)
        {
            return null;
        }

        var found = new ProblemList(problems.File);
        var lut = new GrayPhaseTable(
            [.. Enumerable.Range(0, table.RowCount).Select(row => table.Whole(row, "gray", found) ?? -1)],
            [.. Enumerable.Range(0, table.RowCount).Select(row => table.Number(row, "phase_rad", found))]);
        if (found.IsEmpty)
        {
            found.Add(GrayPhaseChecks.Check(lut, problems.File));
        }

        problems.Add(found.ToImmutable());
        return found.IsEmpty ? lut : null;
    }

    /// <summary>Writes a table so that reading it gives the same numbers. Lines end in \n.</summary>
    public static string Write(GrayPhaseTable table)
    {
        var text = new StringBuilder(string.Join(',', Columns)).Append('\n');
        for (int i = 0; i < table.Gray.Length; i++)
        {
            text.Append(CultureInfo.InvariantCulture, $"{table.Gray[i]},{table.PhaseRad[i]:R}\n");
        }

        return text.ToString();
    }
}
