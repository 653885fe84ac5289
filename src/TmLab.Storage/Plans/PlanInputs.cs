using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Shaping;
using TmLab.Storage.Images;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Plans;

/// <summary>Reads the files that a plan can be made from.</summary>
public static class PlanInputs
{
    /// <summary>The settings with what stands in the files; null for a file that is not given.</summary>
    /// <param name="settings">All else.</param>
    /// <param name="patterns">Custom pattern matrix, .npy, of the shape that the settings' modes say.</param>
    /// <param name="lut">Grey-to-phase table, CSV.</param>
    /// <param name="flatness">Flatness image, 8-bit PNG or BMP of the panel's size.</param>
    /// <exception cref="BadInputException">A file is missing or not of its kind.</exception>
    public static PlanSettings Load(PlanSettings settings, string? patterns, string? lut, string? flatness) => settings with
    {
        CustomPatterns = patterns is null ? settings.CustomPatterns : ReadPatterns(patterns, settings.Modes),
        PhaseLut = lut is null ? settings.PhaseLut : ReadLut(lut),
        Flatness = flatness is null ? settings.Flatness : ReadFlatness(flatness, settings.Modulator),
    };

    private static ImmutableArray<Complex> ReadPatterns(string file, ModeDescription modes)
    {
        var problems = new ProblemList(file);
        ImmutableArray<Complex> patterns = CustomPatternFile.Read(file, file, modes with { PatternDataset = null });
        problems.Add(ModeChecks.CheckPatterns(patterns.AsSpan(), modes.ModeCount, file));
        problems.ThrowIfAny();
        return patterns;
    }

    private static GrayPhaseTable ReadLut(string file)
    {
        var problems = new ProblemList(file);
        GrayPhaseTable? lut = PhaseLutCsv.Read(file, problems);
        problems.ThrowIfAny();
        return lut!;
    }

    private static ImmutableArray<byte> ReadFlatness(string file, ModulatorDescription panel)
    {
        using FileStream stream = InputFile.OpenSequential(file, file);
        ModulatorImage image = ModulatorImageFile.Read(stream, file);
        return image.Size == panel.Size && image.Depth == ModulatorImageDepth.EightBit
            ? image.Levels
            : throw new BadInputException(
                file, null, $"the flatness image has {image.Size} pixels ({image.Depth}), the panel {panel.Size} at 8 bits",
                "give an 8-bit grey image of the panel's native size");
    }
}
