using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Simulation;

namespace TmLab.Cli.Stages;

/// <summary>A measurement that was simulated.</summary>
/// <param name="Manifest">The manifest that was written.</param>
/// <param name="FrameSize">The frames' size.</param>
/// <param name="FrameCount">Number of frames.</param>
/// <param name="Medium">The medium in words.</param>
/// <param name="Bench">The bench.</param>
/// <param name="DriftRangeRad">Largest less smallest true phase.</param>
internal sealed record SimulateOutcome(
    MeasurementManifest Manifest, ImageSize FrameSize, int FrameCount, string Medium, BenchSettings Bench, double DriftRangeRad);
