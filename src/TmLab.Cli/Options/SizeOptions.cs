using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using TmLab.Quantities;

namespace TmLab.Cli.Options;

/// <summary>Sizes such as <c>512x512</c> and rectangles such as <c>0,0,512,512</c>.</summary>
internal static class SizeOptions
{
    private const int Largest = 1 << 20;

    /// <summary>WIDTHxHEIGHT.</summary>
    public static Option<ImageSize> Size(string name, ImageSize standard, string description) => new(name)
    {
        Description = description,
        HelpName = "WIDTHxHEIGHT",
        DefaultValueFactory = _ => standard,
        CustomParser = result => Pair(result, name, "WIDTHxHEIGHT") is var (width, height) ? new ImageSize(width, height) : standard,
    };

    /// <summary>ROWSxCOLUMNS.</summary>
    public static Option<GridShape> Grid(string name, GridShape standard, string description) => new(name)
    {
        Description = description,
        HelpName = "ROWSxCOLUMNS",
        DefaultValueFactory = _ => standard,
        CustomParser = result => Pair(result, name, "ROWSxCOLUMNS") is var (rows, columns) ? new GridShape(rows, columns) : standard,
    };

    /// <summary>X,Y,WIDTH,HEIGHT.</summary>
    public static Option<PixelRectangle?> Rectangle(string name, string description) => new(name)
    {
        Description = description,
        HelpName = "X,Y,WIDTH,HEIGHT",
        CustomParser = result =>
        {
            int?[] parts = [.. result.Tokens[0].Value.Split(',').Select(Whole)];
            if (parts.Length == 4 && parts.All(p => p is not null) && parts[2] > 0 && parts[3] > 0)
            {
                return new PixelRectangle(parts[0]!.Value, parts[1]!.Value, parts[2]!.Value, parts[3]!.Value);
            }

            result.AddError($"{name} {result.Tokens[0].Value}: not a rectangle; write it like 0,0,512,512 (column, row, width, height)");
            return null;
        },
    };

    private static (int A, int B)? Pair(ArgumentResult result, string name, string form)
    {
        int?[] parts = [.. result.Tokens[0].Value.Split('x').Select(Whole)];
        if (parts.Length == 2 && parts[0] > 0 && parts[1] > 0)
        {
            return (parts[0]!.Value, parts[1]!.Value);
        }

        result.AddError($"{name} {result.Tokens[0].Value}: not a size; write {form}, like 16x16");
        return null;
    }

    private static int? Whole(string text) =>
        int.TryParse(text, NumberStyles.None, CultureInfo.InvariantCulture, out int value) && value <= Largest ? value : null;
}
