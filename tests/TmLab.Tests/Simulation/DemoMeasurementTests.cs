using System.Text.Json;
using TmLab.Measurement;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

/// <summary>
/// The shipped measurement is what the library makes. To write it anew after a wanted change, run this class with the environment
/// variable TMLAB_WRITE_DEMO set to 1, then look at the difference and state the reason in the change.
/// </summary>
public sealed class DemoMeasurementTests(DemoRun run) : IClassFixture<DemoRun>
{
    [Fact]
    public void The_shipped_frames_are_those_that_the_library_makes()
    {
        byte[] frames = run.FrameBytes();
        byte[] shipped = File.ReadAllBytes(Path.Combine(DemoFolder.Path, DemoMeasurement.FramesFile));
        Assert.Equal(shipped.Length, frames.Length);
        Assert.True(shipped.AsSpan().SequenceEqual(frames), "The frames differ from the shipped ones.");
    }

    [Fact]
    public void The_shipped_truth_and_texts_are_those_that_the_library_makes()
    {
        VirtualBench bench = run.Bench;
        Assert.True(DemoFolder.Npy(bench.Truth.Matrix).AsSpan().SequenceEqual(Shipped("truth-matrix.npy")));
        Assert.Equal(DemoFolder.TruthText(bench.Truth), ShippedText("truth-frames.csv"));
        Assert.Equal(DemoFolder.ScheduleText(), ShippedText(DemoMeasurement.ScheduleFile));
        Assert.Equal(DemoFolder.ManifestText, ShippedText("measurement.json"));
    }

    [Fact]
    public void The_manifest_file_says_what_the_library_says()
    {
        using JsonDocument document = JsonDocument.Parse(DemoFolder.ManifestText);
        JsonElement root = document.RootElement;
        MeasurementManifest manifest = DemoMeasurement.Manifest;
        JsonElement camera = root.GetProperty("camera");
        Assert.Equal(manifest.Title, root.GetProperty("title").GetString());
        Assert.Equal(manifest.WavelengthNm, root.GetProperty("wavelength_nm").GetDouble());
        Assert.Equal(manifest.Notes, root.GetProperty("notes").GetString());
        Assert.Equal(manifest.Camera.Size!.Value.Width, camera.GetProperty("width").GetInt32());
        Assert.Equal(manifest.Camera.Size!.Value.Height, camera.GetProperty("height").GetInt32());
        Assert.Equal(manifest.Camera.BitDepth, camera.GetProperty("bit_depth").GetInt32());
        Assert.Equal(DemoMeasurement.Settings.Camera.ElectronsPerCount, camera.GetProperty("electrons_per_count").GetDouble());
        Assert.Equal(DemoMeasurement.Settings.Camera.ReadNoiseElectrons, camera.GetProperty("read_noise_e").GetDouble());
        Assert.Equal(manifest.Modes.PatternCount, root.GetProperty("modes").GetProperty("count").GetInt32());
        Assert.Equal(manifest.Modulator!.PixelPitchUm, root.GetProperty("modulator").GetProperty("pixel_pitch_um").GetDouble());
    }

    [Fact]
    public void The_measurement_is_a_sound_one()
    {
        VirtualBench bench = run.Bench;
        RecordedFrames frames = run.Frames;
        double drift = bench.Truth.DriftPhaseRad.Max() - bench.Truth.DriftPhaseRad.Min();
        Assert.InRange(drift, 3, 12);
        long saturated = Enumerable.Range(0, frames.FrameCount).Sum(f => (long)frames.Frame(f).ToArray().Count(c => c >= 4060));
        Assert.InRange(saturated / (double)(frames.FrameCount * frames.FrameSize.PixelCount), 0, 1e-3);
        Assert.Equal(3, bench.Truth.DeadPixels.Length);
        foreach (StepGroup[] pair in DemoMeasurement.Schedule.Trackers.Zip(DemoMeasurement.Schedule.Trackers.Skip(1), (a, b) => (StepGroup[])[a, b]))
        {
            double change = bench.Truth.DriftPhaseRad[pair[1].Frames[0]] - bench.Truth.DriftPhaseRad[pair[0].Frames[0]];
            Assert.InRange(change, -Math.PI / 2, Math.PI / 2);
        }
    }

    [Fact]
    public void The_folder_stays_under_six_megabytes() =>
        Assert.InRange(new DirectoryInfo(DemoFolder.Path).GetFiles().Sum(f => f.Length), 1, 6_000_000);

    private static byte[] Shipped(string name) => File.ReadAllBytes(Path.Combine(DemoFolder.Path, name));

    private static string ShippedText(string name) => File.ReadAllText(Path.Combine(DemoFolder.Path, name)).ReplaceLineEndings("\n");
}
