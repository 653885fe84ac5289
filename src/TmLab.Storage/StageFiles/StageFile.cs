using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Quantities;

namespace TmLab.Storage.StageFiles;

/// <summary>Looks at stage files of any kind.</summary>
public static class StageFile
{
    /// <summary>Says what a stage file holds.</summary>
    /// <exception cref="BadInputException">The file is missing, damaged or no stage file.</exception>
    public static StageFileDescription Describe(string path)
    {
        using var reader = StageFileReader.Open(path, null);
        return reader.Describe();
    }

    /// <summary>Compares everything that has checksums with them: the headers when the file is opened, the large datasets block by block.</summary>
    /// <returns>The large datasets that were compared.</returns>
    /// <exception cref="BadInputException">Something differs.</exception>
    /// <exception cref="OperationCanceledException">It was stopped.</exception>
    public static ImmutableArray<string> Verify(string path, IProgress<StageProgress>? progress = null, CancellationToken cancel = default)
    {
        using var reader = StageFileReader.Open(path, null);
        ImmutableArray<string> datasets =
        [
            .. reader.Describe().Datasets.Select(d => d.Path)
                .Where(p => p.StartsWith(StageFileWriter.ChecksumGroup + "/", StringComparison.Ordinal))
                .Select(p => p[StageFileWriter.ChecksumGroup.Length..]),
        ];
        reader.Verify(datasets, progress, cancel);
        return datasets;
    }
}
