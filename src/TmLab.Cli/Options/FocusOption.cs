using System.Collections.Immutable;
using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using TmLab.Quantities;

namespace TmLab.Cli.Options;

/// <summary><c>--focus X,Y</c>, as often as there are targets.</summary>
internal static class FocusOption
{
    public static Option<ImmutableArray<CameraPixel>> Create(bool required, string description) => new("--focus")
    {
        Description = description,
        HelpName = "X,Y",
        Required = required,
        Arity = ArgumentArity.OneOrMore,
        CustomParser = Parse,
    };

    /// <summary>The targets that were given, none when the option was not.</summary>
    public static ImmutableArray<CameraPixel> Read(ParseResult parse, Option<ImmutableArray<CameraPixel>> option) =>
        parse.GetValue(option) is { IsDefault: false } targets ? targets : [];

    private static ImmutableArray<CameraPixel> Parse(ArgumentResult result)
    {
        var pixels = ImmutableArray.CreateBuilder<CameraPixel>();
        foreach (string text in result.Tokens.Select(t => t.Value))
        {
            if (!TryParse(text, out CameraPixel pixel))
            {
                result.AddError($"--focus {text}: not a pixel; write column and row of the camera region, counted from 0, like 24,20");
            }
            else if (pixels.Contains(pixel))
            {
                result.AddError($"--focus {text}: given twice");
            }
            else
            {
                pixels.Add(pixel);
            }
        }

        return pixels.ToImmutable();
    }

    private static bool TryParse(string text, out CameraPixel pixel)
    {
        pixel = default;
        string[] parts = text.Split(',');
        if (parts.Length != 2 || !TryWhole(parts[0], out int x) || !TryWhole(parts[1], out int y))
        {
            return false;
        }

        pixel = new CameraPixel(x, y);
        return true;
    }

    private static bool TryWhole(string text, out int value) =>
        int.TryParse(text, NumberStyles.None, CultureInfo.InvariantCulture, out value);
}
