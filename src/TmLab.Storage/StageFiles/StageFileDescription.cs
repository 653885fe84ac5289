using System.Collections.Immutable;

namespace TmLab.Storage.StageFiles;

/// <summary>What a stage file holds, without its data. Immutable.</summary>
/// <param name="File">The file.</param>
/// <param name="Length">Its size, bytes.</param>
/// <param name="Format">Its kind.</param>
/// <param name="FormatVersion">The version of its layout.</param>
/// <param name="Provenance">Where it comes from.</param>
/// <param name="IsSealed">Whether its headers are protected by a checksum, which has been found right; false for files rewritten by another program.</param>
/// <param name="Datasets">Its datasets, by name.</param>
public sealed record StageFileDescription(
    string File,
    long Length,
    StageFormat Format,
    int FormatVersion,
    StageProvenance Provenance,
    bool IsSealed,
    ImmutableArray<DatasetDescription> Datasets);

/// <summary>A dataset without its data.</summary>
/// <param name="Path">Its absolute name.</param>
/// <param name="Shape">Its dimensions, slowest first; empty for a single value.</param>
/// <param name="ElementType">The type of its elements, such as <c>uint16</c>, <c>complex64</c> or <c>text</c>.</param>
/// <param name="Units">Their unit; null where the file does not say.</param>
public sealed record DatasetDescription(string Path, ImmutableArray<long> Shape, string ElementType, string? Units);
