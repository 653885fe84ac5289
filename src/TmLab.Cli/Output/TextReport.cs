using System.Globalization;

namespace TmLab.Cli.Output;

/// <summary>The text form of results: a heading, then labelled rows in two columns.</summary>
internal sealed class TextReport(TextWriter output)
{
    private const int LabelWidth = 22;

    public void Heading(string text) => output.WriteLine(text);

    public void Row(string label, string value) => output.WriteLine($"  {label.PadRight(LabelWidth)} {value}");

    /// <summary>Rows aligned on the longest of their labels.</summary>
    public void Rows(IReadOnlyCollection<(string Label, string Value)> rows)
    {
        int width = rows.Select(r => r.Label.Length).DefaultIfEmpty(0).Max();
        foreach ((string label, string value) in rows)
        {
            output.WriteLine($"  {label.PadRight(width)} {value}");
        }
    }

    public void Row(string label, double value, string unit = "") => Row(label, Figure(value, unit));

    public void Line(string text) => output.WriteLine(text);

    public void Blank() => output.WriteLine();

    /// <summary>Four significant digits and the unit; "not known" for NaN.</summary>
    public static string Figure(double value, string unit = "")
    {
        if (double.IsNaN(value))
        {
            return "not known";
        }

        string number = value.ToString("G4", CultureInfo.InvariantCulture);
        return unit.Length == 0 ? number : $"{number} {unit}";
    }

    /// <summary>A whole number with thousands set off.</summary>
    public static string Count(long value) => value.ToString("N0", CultureInfo.InvariantCulture);
}
