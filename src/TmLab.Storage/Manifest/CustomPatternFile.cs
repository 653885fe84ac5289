using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Storage.Frames;

namespace TmLab.Storage.Manifest;

/// <summary>Reads the pattern matrix B (K × N) of a custom basis from a NumPy array file or an HDF5 dataset.</summary>
internal static class CustomPatternFile
{
    /// <summary>Reads K × N elements, row-major. Shape is checked before memory is taken; values are not checked.</summary>
    public static ImmutableArray<Complex> Read(string path, string name, ModeDescription modes)
    {
        if (modes.PatternDataset is { } dataset)
        {
            return Hdf5ComplexMatrix.Read(path, name, dataset, modes.PatternCount, modes.ModeCount);
        }

        using FileStream stream = InputFile.OpenSequential(path, name);
        return NpyMatrix.Read(stream, name, modes.PatternCount, modes.ModeCount);
    }

    /// <summary>The failure of a matrix whose shape is not the one wanted.</summary>
    internal static BadInputException WrongShape(string name, string? place, string found, int rows, int columns) => new(
        name, place, $"the array has shape ({found}); {rows} patterns × {columns} macro-pixels need ({rows}, {columns})",
        "give one row a pattern, or correct modes.count and modes.grid");
}
