using System.Runtime.InteropServices;
using TmLab.Simulation;

namespace TmLab.Tests.Simulation;

/// <summary>The shipped measurement made anew, once for all its tests; writes it to data-demo where TMLAB_WRITE_DEMO is 1.</summary>
public sealed class DemoRun : IDisposable
{
    public DemoRun()
    {
        Bench = DemoMeasurement.CreateBench();
        Frames = Benches.Record(Bench);
        if (Environment.GetEnvironmentVariable("TMLAB_WRITE_DEMO") == "1")
        {
            Write();
        }
    }

    public VirtualBench Bench { get; }

    public RecordedFrames Frames { get; }

    /// <summary>All frames back to back, 16-bit little-endian.</summary>
    public byte[] FrameBytes()
    {
        return [.. Enumerable.Range(0, Frames.FrameCount).SelectMany(f => MemoryMarshal.AsBytes(Frames.Frame(f)).ToArray())];
    }

    public void Dispose()
    {
        Frames.Dispose();
        Bench.Dispose();
    }

    private void Write()
    {
        Directory.CreateDirectory(DemoFolder.Path);
        File.WriteAllBytes(Path.Combine(DemoFolder.Path, DemoMeasurement.FramesFile), FrameBytes());
        File.WriteAllBytes(Path.Combine(DemoFolder.Path, "truth-matrix.npy"), DemoFolder.Npy(Bench.Truth.Matrix));
        File.WriteAllText(Path.Combine(DemoFolder.Path, "truth-frames.csv"), DemoFolder.TruthText(Bench.Truth));
        File.WriteAllText(Path.Combine(DemoFolder.Path, DemoMeasurement.ScheduleFile), DemoFolder.ScheduleText());
        File.WriteAllText(Path.Combine(DemoFolder.Path, "measurement.json"), DemoFolder.ManifestText);
    }
}
