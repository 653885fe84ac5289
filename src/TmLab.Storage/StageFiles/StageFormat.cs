using System.Collections.Immutable;

namespace TmLab.Storage.StageFiles;

/// <summary>A kind of stage file: what its root attributes <c>format</c> and <c>format_version</c> say.</summary>
/// <param name="Name">The name.</param>
/// <param name="Version">The version that this program writes, and the newest that it reads.</param>
/// <param name="Contents">What it holds, in a word.</param>
public sealed record StageFormat(string Name, int Version, string Contents)
{
    /// <summary>Frames and what is known of them.</summary>
    public static StageFormat Measurement { get; } = new("tmlab-measurement", 1, "measurement");

    /// <summary>A transmission matrix.</summary>
    public static StageFormat Matrix { get; } = new("tmlab-matrix", 1, "transmission matrix");

    /// <summary>Singular values and vectors of a transmission matrix.</summary>
    public static StageFormat Channels { get; } = new("tmlab-channels", 1, "channels");

    /// <summary>All kinds.</summary>
    public static ImmutableArray<StageFormat> All { get; } = [Measurement, Matrix, Channels];
}
