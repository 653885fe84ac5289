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

    /// <summary>Takes the facts.</summary>
    /// <param name="parents">The files that the stage read, at most <see cref="MostParents"/>.</param>
    /// <param name="settingsJson">All that the stage was told, as JSON text.</param>
    /// <param name="toolVersion">The program's version.</param>
    /// <param name="createdUtc">When the stage began, as the caller's clock says.</param>
    /// <exception cref="ArgumentOutOfRangeException">There are too many parents.</exception>
    public StageProvenance(ImmutableArray<StageParent> parents, string settingsJson, string toolVersion, DateTimeOffset createdUtc)
    {
        Preconditions.InRange(parents.Length, 0, MostParents);
        Parents = parents;
        SettingsJson = settingsJson;
        ToolVersion = toolVersion;
        CreatedUtc = createdUtc.ToUniversalTime();
    }

    /// <summary>The files that the stage read.</summary>
    public ImmutableArray<StageParent> Parents { get; }

    /// <summary>All that the stage was told, as JSON text.</summary>
    public string SettingsJson { get; }

    /// <summary>The program's version.</summary>
    public string ToolVersion { get; }

    /// <summary>When the stage began, UTC.</summary>
    public DateTimeOffset CreatedUtc { get; }
}
