namespace TmLab.Channels;

/// <summary>Everything that a decomposition can be told; the defaults stand here and nowhere else. Immutable.</summary>
public sealed record ChannelSettings
{
    /// <summary>How many leading channels to find with their vectors: null for all, 0 for singular values only.</summary>
    public int? Leading { get; init; }

    /// <summary>Bytes of one tile of rows; two are held at a time.</summary>
    public long TileBytes { get; init; } = 32L << 20;

    /// <summary>A matrix with fewer valid modes than this has no spectrum worth the name.</summary>
    public int FewestModes { get; init; } = 8;
}
