using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;

namespace TmLab.Cli.Stages;

/// <summary>A measurement folder to be taken into a measurement file, joined with a second one where that is named.</summary>
internal sealed record IngestRequest(string Folder, string Output, string? Second = null);

/// <summary>A measurement to be planned; names of files to read are null where they were not given.</summary>
internal sealed record PlanRequest(
    string Output, PlanSettings Settings, string? Patterns, string? Lut, string? Flatness, string? Repair, string? Measurement);

/// <summary>A planned measurement whose frames are to be simulated.</summary>
internal sealed record SimulateRequest(string Input, string Output, FrameStorageKind Frames, BenchRequest Bench);

/// <summary>A measurement file to be turned into a matrix file; the drift is followed in the default way when none is named.</summary>
internal sealed record ReconstructRequest(string Input, string Output, DriftMethod? Drift = null);

/// <summary>A matrix file to be decomposed into a channel file: all channels, or the leading ones, or with 0 singular values only.</summary>
internal sealed record ChannelsRequest(string Input, string Output, int? Leading = null);

/// <summary>A matrix file from which to make a mask that focuses on the targets.</summary>
internal sealed record MaskRequest(string Input, ImmutableArray<CameraPixel> Targets, string Output);

/// <summary>A file to be described.</summary>
internal sealed record ShowRequest(string Input);

/// <summary>All stages in one; without targets the valid pixel nearest to the centre of the camera region is taken.</summary>
internal sealed record RunRequest(string Folder, string OutputFolder, ImmutableArray<CameraPixel> Targets);

/// <summary>A stage file to be judged: whether its checksums are compared, and what is required of a matrix.</summary>
internal sealed record CheckRequest(string Input, bool Verify, ImmutableArray<Requirement> Requirements);
