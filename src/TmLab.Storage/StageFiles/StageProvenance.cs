using System.Collections.Immutable;
using TmLab.Numerics;

namespace TmLab.Storage.StageFiles;

/// <summary>A file that a stage read.</summary>
/// <param name="File">Its name as the stage was given it.</param>
/// <param name="Sha256">SHA-256 (FIPS 180-4) of its bytes, 64 lower-case hexadecimal digits; see <see cref="FileDigest"/>.</param>
public sealed record StageParent(string File, string Sha256);

/// <summary>Where a stage file comes from: enough to make it again and to check what it was made of. Immutable.</summary>
public sealed record StageProvenance
{
    /// <summary>The largest number of parents; where there are more (one image file a frame), give the digest of their list.</summary>
    public const int MostParents = 1000;

    private readonly Lazy<ImmutableArray<StageParent>> _parents;

    /// <summary>Takes the facts.</summary>
    /// <param name="parents">The files that the stage read, at most <see cref="MostParents"/>.</param>
    /// <param name="settingsJson">All that the stage was told, as JSON text.</param>
    /// <param name="toolVersion">The program's version.</param>
    /// <param name="createdUtc">When the stage began, as the caller's clock says.</param>
    /// <exception cref="ArgumentOutOfRangeException">There are too many parents.</exception>
    public StageProvenance(ImmutableArray<StageParent> parents, string settingsJson, string toolVersion, DateTimeOffset createdUtc)
    {
        Preconditions.InRange(parents.Length, 0, MostParents);
        _parents = new Lazy<ImmutableArray<StageParent>>(parents);
        SettingsJson = settingsJson;
        ToolVersion = toolVersion;
        CreatedUtc = createdUtc.ToUniversalTime();
    }

    private StageProvenance(Lazy<ImmutableArray<StageParent>> parents, string settingsJson, string toolVersion, DateTimeOffset createdUtc)
        : this([], settingsJson, toolVersion, createdUtc) => _parents = parents;

    /// <summary>The files that the stage read. Waits for their digests where these are still being computed.</summary>
    /// <exception cref="Failures.BadInputException">A file cannot be read.</exception>
    /// <exception cref="OperationCanceledException">The computing of the digests was stopped.</exception>
    public ImmutableArray<StageParent> Parents => _parents.Value;

    /// <summary>Begins to compute the digests of files in the background, while the stage does its work.</summary>
    /// <param name="files">The files that the stage reads, at most <see cref="MostParents"/>.</param>
    /// <param name="settingsJson">All that the stage was told, as JSON text.</param>
    /// <param name="toolVersion">The program's version.</param>
    /// <param name="createdUtc">When the stage began, as the caller's clock says.</param>
    /// <param name="cancel">Stops the computing.</param>
    public static StageProvenance OfFiles(
        ImmutableArray<string> files, string settingsJson, string toolVersion, DateTimeOffset createdUtc, CancellationToken cancel)
    {
        Preconditions.InRange(files.Length, 0, MostParents);
        Task<ImmutableArray<StageParent>> digests = Task.Run(
            () => files.Select(f => new StageParent(f, FileDigest.Sha256(f, null, cancel))).ToImmutableArray(), cancel);
        return new StageProvenance(
            new Lazy<ImmutableArray<StageParent>>(() => digests.GetAwaiter().GetResult()), settingsJson, toolVersion, createdUtc);
    }

    /// <summary>All that the stage was told, as JSON text.</summary>
    public string SettingsJson { get; }

    /// <summary>The program's version.</summary>
    public string ToolVersion { get; }

    /// <summary>When the stage began, UTC.</summary>
    public DateTimeOffset CreatedUtc { get; }
}
