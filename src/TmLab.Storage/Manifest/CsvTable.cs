using System.Globalization;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>
/// A small comma-separated table (RFC 4180) with a header: columns are found by name, in any order. Numbers are written with a
/// point, whatever the computer's language.
/// </summary>
internal sealed class CsvTable
{
    private const int MostRows = 100_000_000;

    private readonly Dictionary<string, int> _columns = new(StringComparer.Ordinal);
    private readonly List<string[]> _rows = [];

    private CsvTable()
    {
    }

    /// <summary>Number of rows below the header.</summary>
    public int RowCount => _rows.Count;

    /// <summary>Whether the header has an optional column.</summary>
    public bool Has(string column) => _columns.ContainsKey(column);

    /// <summary>A field without surrounding blanks; empty when the column is absent.</summary>
    public string this[int row, string column] => _columns.TryGetValue(column, out int at) ? _rows[row][at] : "";

    /// <summary>Reads a table; problems are added, and null is returned when nothing more can be said about it.</summary>
    public static CsvTable? Read(string path, string[] required, string[] optional, ProblemList problems)
    {
        using StreamReader reader = OpenText(path, problems.File);
        string? header = reader.ReadLine();
        if (string.IsNullOrWhiteSpace(header))
        {
            problems.Add("line 1", "the file has no header", $"begin it with {string.Join(',', required)}");
            return null;
        }

        var table = new CsvTable();
        return table.TakeHeader(header, required, optional, problems) && table.TakeRows(reader, problems) ? table : null;
    }

    /// <summary>A field as a number; NaN with a problem when it is none.</summary>
    public double Number(int row, string column, ProblemList problems)
    {
        string field = this[row, column];
        if (double.TryParse(field, NumberStyles.Float, CultureInfo.InvariantCulture, out double number))
        {
            return number;
        }

        problems.Add($"line {row + 2}, column {column}", $"\"{field}\" is not a number", "write numbers with a decimal point");
        return double.NaN;
    }

    /// <summary>A field as a whole number; null with a problem when it is none.</summary>
    public int? Whole(int row, string column, ProblemList problems)
    {
        string field = this[row, column];
        if (int.TryParse(field, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out int whole))
        {
            return whole;
        }

        problems.Add($"line {row + 2}, column {column}", $"\"{field}\" is not a whole number", "write a whole number without a point");
        return null;
    }

    private static StreamReader OpenText(string path, string file)
    {
        try
        {
            return new StreamReader(path);
        }
        catch (Exception failure) when (failure is IOException or UnauthorizedAccessException)
        {
            throw InputFile.CannotOpen(file, failure);
        }
    }

    private bool TakeHeader(string header, string[] required, string[] optional, ProblemList problems)
    {
        if (!header.Contains(',', StringComparison.Ordinal) && header.IndexOfAny([';', '\t']) >= 0)
        {
            string separator = header.Contains(';', StringComparison.Ordinal) ? "semicolons" : "tabs";
            problems.Add("line 1", $"the columns are separated by {separator}", "export with commas between columns and points in numbers");
            return false;
        }

        string[] names = Fields(header);
        string[] known = [.. required, .. optional];
        for (int i = 0; i < names.Length; i++)
        {
            if (!known.Contains(names[i]))
            {
                problems.Add("line 1", $"unknown column \"{names[i]}\"", $"did you mean \"{NearestName.Of(names[i], known)}\"?");
            }
            else if (!_columns.TryAdd(names[i], i))
            {
                problems.Add("line 1", $"the column \"{names[i]}\" appears twice", "keep one of them");
            }
        }

        foreach (string missing in required.Where(r => !_columns.ContainsKey(r)))
        {
            problems.Add("line 1", $"the column \"{missing}\" is missing", $"give the columns {string.Join(',', required)}");
        }

        return problems.IsEmpty;
    }

    private bool TakeRows(StreamReader reader, ProblemList problems)
    {
        int columns = _columns.Count;
        int blank = 0;
        while (reader.ReadLine() is { } line && _rows.Count < MostRows)
        {
            if (string.IsNullOrWhiteSpace(line))
            {
                blank++;
                continue;
            }

            string[] fields = Fields(line);
            if (blank > 0 || fields.Length != columns)
            {
                AddRowProblem(problems, blank, fields.Length, columns);
                return false;
            }

            _rows.Add(fields);
        }

        return true;
    }

    private void AddRowProblem(ProblemList problems, int blank, int found, int columns)
    {
        string place = $"line {_rows.Count + 2}";
        if (blank > 0)
        {
            problems.Add(place, "an empty line stands between rows", "remove it");
            return;
        }

        string remedy = found > columns ? "write numbers with decimal points, not commas, and one field a column" : "write one field a column, empty where there is nothing to say";
        problems.Add(place, $"the row has {found} fields, the header {columns}", remedy);
    }

    private static string[] Fields(string line)
    {
        if (!line.Contains('"', StringComparison.Ordinal))
        {
            return line.Split(',', StringSplitOptions.TrimEntries);
        }

        var fields = new List<string>();
        var field = new System.Text.StringBuilder();
        bool quoted = false;
        foreach (char c in line)
        {
            // A doubled quote inside quotes leaves and re-enters the quoted state; it never occurs in numbers or words.
            if (c == '"')
            {
                quoted = !quoted;
            }
            else if (c == ',' && !quoted)
            {
                fields.Add(field.ToString().Trim());
                field.Clear();
            }
            else
            {
                field.Append(c);
            }
        }

        fields.Add(field.ToString().Trim());
        return [.. fields];
    }
}
