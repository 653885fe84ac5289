using TmLab.Matrix;

namespace TmLab.Reconstruction;

/// <summary>Everything that a reconstruction can be told; the defaults stand here and nowhere else. Immutable.</summary>
public sealed record ReconstructionSettings
{
    /// <summary>How the phase drift is followed; where a way is not open the next simpler one is taken and a warning says so.</summary>
    public DriftMethod Drift { get; init; } = DriftMethod.SmoothedPath;

    /// <summary>Number of pixels from which the phases of the frames are found.</summary>
    public int DriftPixels { get; init; } = 1024;

    /// <summary>Expected spread of the laser power from frame to frame, relative: a weak prior.</summary>
    public double PowerSpread { get; init; } = 0.02;

    /// <summary>A tracker gap of more phase than this, radians, is reported: beyond π the unwrapping would be wrong.</summary>
    public double TrackerGapWarningRad { get; init; } = Math.PI / 2;

    /// <summary>A pixel at full scale in more than this share of the frames is invalid.</summary>
    public double SaturatedFrameLimit { get; init; } = 0.01;

    /// <summary>A pixel whose reference intensity is below this many of its standard errors is invalid.</summary>
    public double ReferenceSignificance { get; init; } = 3;

    /// <summary>At how many modes, spread evenly, visibility and noise of the pixels are measured.</summary>
    public int SurveyModes { get; init; } = 48;

    /// <summary>Memory that the tiles may take, bytes.</summary>
    public long MemoryBytes { get; init; } = 1L << 30;

    /// <summary>A tile's counts and rows together take at most this, bytes, so that reading has long runs and the buffers stay small.</summary>
    public long LargestTileBytes { get; init; } = 64L << 20;

    /// <summary>Number of threads; the results do not depend on it.</summary>
    public int Threads { get; init; } = Environment.ProcessorCount;

    /// <summary>Pixels whose planes are transformed together; chosen to keep the planes in the second-level cache.</summary>
    public int? Lanes { get; init; }
}
