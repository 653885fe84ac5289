using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>A measurement folder whose manifest, schedule and side files were read and checked, and whose frames are ready to be read.</summary>
/// <param name="ManifestPath">The manifest's full path.</param>
/// <param name="Manifest">What the bench says.</param>
/// <param name="Schedule">The frames in order; as many as <paramref name="Frames"/> has.</param>
/// <param name="Frames">The counts, read once from front to back. Owned: closed by <see cref="Dispose"/>.</param>
/// <param name="FramesName">The frames' file as the manifest names it, for messages.</param>
/// <param name="CustomPatterns">Pattern matrix B (K × N, row-major) of a custom basis; empty otherwise.</param>
/// <param name="PhaseLut">The modulator's grey-to-phase table; null when not given.</param>
/// <param name="Flatness">The panel's flatness image, 8-bit, native size, row-major; empty when not given.</param>
public sealed record OpenedMeasurement(
    string ManifestPath,
    MeasurementManifest Manifest,
    Schedule Schedule,
    IFrameSource Frames,
    string FramesName,
    ImmutableArray<Complex> CustomPatterns,
    GrayPhaseTable? PhaseLut,
    ImmutableArray<byte> Flatness) : IDisposable
{
    /// <summary>Closes the frames' files.</summary>
    public void Dispose() => Frames.Dispose();
}
