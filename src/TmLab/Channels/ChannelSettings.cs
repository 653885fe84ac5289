namespace TmLab.Channels;

/// <summary>Everything that a decomposition can be told; the defaults stand here and nowhere else. Immutable.</summary>
public sealed record ChannelSettings
{
    /// <summary>How many leading channels to find with their vectors: null for all, 0 for singular values only.</summary>
    public int? Leading { get; init; }

    /// <summary>Bytes of one tile of rows; two are held at a time.</summary>
    public long TileBytes { get; init; } = 32L << 20;

    /// <summary>The defaults with tiles that fit a memory budget: an eighth of it each, no more than the default and no less than 1 MiB.</summary>
    public static ChannelSettings Within(long memoryBytes)
    {
        var defaults = new ChannelSettings();
        return defaults with { TileBytes = Math.Clamp(memoryBytes / 8, 1L << 20, defaults.TileBytes) };
    }

    /// <summary>A matrix with fewer valid modes than this has no spectrum worth the name.</summary>
    public int FewestModes { get; init; } = 8;
}
