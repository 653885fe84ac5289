using System.Collections.Immutable;
using TmLab.Quantities;

namespace TmLab.Measurement;

/// <summary>Everything the science needs of a measurement besides the counts. Immutable.</summary>
/// <param name="Manifest">What the bench says.</param>
/// <param name="FrameSize">The size of every frame.</param>
/// <param name="Schedule">The frames in order.</param>
/// <param name="FrameFacts">One entry a frame.</param>
/// <param name="DarkCounts">Mean of the dark frames, counts, row-major; all zero when there were none.</param>
/// <param name="CustomPatterns">Pattern matrix B (K × N, row-major) for custom bases; empty otherwise.</param>
/// <param name="PhaseLut">The modulator's grey-to-phase table; null when grey is proportional to phase.</param>
/// <param name="Flatness">The panel's flatness image, 8-bit, native size, row-major; empty when not given.</param>
public sealed record MeasurementFacts(
    MeasurementManifest Manifest,
    ImageSize FrameSize,
    Schedule Schedule,
    ImmutableArray<FrameFacts> FrameFacts,
    ImmutableArray<float> DarkCounts,
    ImmutableArray<System.Numerics.Complex> CustomPatterns,
    GrayPhaseTable? PhaseLut,
    ImmutableArray<byte> Flatness)
{
    /// <summary>Pixels a frame.</summary>
    public int PixelCount => FrameSize.PixelCount;
}

/// <summary>What is kept of each frame beside its counts.</summary>
/// <param name="MeanCount">Mean over all pixels, counts.</param>
/// <param name="SaturatedFraction">Share of pixels at full scale, 0 … 1.</param>
/// <param name="Crc32">CRC-32 (IEEE 802.3) of the frame's counts as little-endian 16-bit numbers.</param>
public readonly record struct FrameFacts(float MeanCount, float SaturatedFraction, uint Crc32);
