using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;

namespace TmLab.Cli.Options;

/// <summary>Options that take numbers within limits, with a point whatever the computer's language.</summary>
internal static class NumberOptions
{
    /// <summary>A number with a default.</summary>
    public static Option<double> Number(string name, string unit, double minimum, double maximum, double standard, string description) => new(name)
    {
        Description = description,
        HelpName = unit,
        DefaultValueFactory = _ => standard,
        CustomParser = result => Parse(result, name, minimum, maximum) ?? standard,
    };

    /// <summary>A number that need not be given.</summary>
    public static Option<double?> Optional(string name, string unit, double minimum, double maximum, string description) => new(name)
    {
        Description = description,
        HelpName = unit,
        CustomParser = result => Parse(result, name, minimum, maximum),
    };

    /// <summary>A whole number with a default.</summary>
    public static Option<int> Whole(string name, string unit, int minimum, int maximum, int standard, string description) => new(name)
    {
        Description = description,
        HelpName = unit,
        DefaultValueFactory = _ => standard,
        CustomParser = result => ParseWhole(result, name, minimum, maximum) ?? standard,
    };

    /// <summary>A whole number that need not be given.</summary>
    public static Option<int?> OptionalWhole(string name, string unit, int minimum, int maximum, string description) => new(name)
    {
        Description = description,
        HelpName = unit,
        CustomParser = result => ParseWhole(result, name, minimum, maximum),
    };

    /// <summary>Several numbers separated by commas; null when they are not as many as wanted.</summary>
    public static double[]? Split(string text, int count)
    {
        string[] parts = text.Split(',');
        double[] numbers = [.. parts.Select(p => double.TryParse(p, NumberStyles.Float, CultureInfo.InvariantCulture, out double n) ? n : double.NaN)];
        return numbers.Length == count && numbers.All(double.IsFinite) ? numbers : null;
    }

    private static double? Parse(ArgumentResult result, string name, double minimum, double maximum)
    {
        string text = result.Tokens[0].Value;
        if (double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out double number) && number >= minimum && number <= maximum)
        {
            return number;
        }

        result.AddError(FormattableString.Invariant($"{name} {text}: not a number from {minimum} to {maximum}"));
        return null;
    }

    private static int? ParseWhole(ArgumentResult result, string name, int minimum, int maximum)
    {
        string text = result.Tokens[0].Value;
        if (int.TryParse(text, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out int number) && number >= minimum && number <= maximum)
        {
            return number;
        }

        result.AddError(FormattableString.Invariant($"{name} {text}: not a whole number from {minimum} to {maximum}"));
        return null;
    }
}
