using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>What a measurement is to be, or was: its manifest, schedule and side files, checked; without frames.</summary>
/// <param name="ManifestPath">The manifest's full path.</param>
/// <param name="Manifest">What the bench says.</param>
/// <param name="Schedule">The frames in order.</param>
/// <param name="CustomPatterns">Pattern matrix B (K × N, row-major) of a custom basis; empty otherwise.</param>
/// <param name="PhaseLut">The modulator's grey-to-phase table; null when not given.</param>
/// <param name="Flatness">The panel's flatness image, 8-bit, native size, row-major; empty when not given.</param>
public sealed record OpenedPlan(
    string ManifestPath,
    MeasurementManifest Manifest,
    Schedule Schedule,
    ImmutableArray<Complex> CustomPatterns,
    GrayPhaseTable? PhaseLut,
    ImmutableArray<byte> Flatness);
