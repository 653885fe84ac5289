using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

/// <summary>Small benches for the tests of this folder.</summary>
internal static class Benches
{
    /// <summary>A camera that adds nothing: no noise, no fixed pattern, one electron a count.</summary>
    public static SimulatedCamera Ideal { get; } = new()
    {
        ElectronsPerCount = 1,
        OffsetCounts = 0,
        ReadNoiseElectrons = 0,
        FullWellElectrons = 1e9,
        PrnuRelative = 0,
        DsnuElectrons = 0,
        HasShotNoise = false,
    };

    public static MeasurementManifest Manifest(
        int side, int gridSide, BasisKind basis = BasisKind.Hadamard, SteppedArm arm = SteppedArm.Signal,
        HadamardOrdering ordering = HadamardOrdering.Natural, int bitDepth = 16) => new(
        null, null,
        new CameraDescription(new ImageSize(side, side), bitDepth, null, null, null),
        new FrameLocation(FrameStorageKind.Raw, ["frames.raw"], null, RawPixelFormat.UInt16LittleEndian, 0),
        new ScheduleLocation("schedule.csv", null, 0),
        new ModeDescription(basis, ordering, gridSide * gridSide, new GridShape(gridSide, gridSide), null, null),
        null, arm, null, null);

    public static Schedule Schedule(int patterns, int steps = 4, int trackerEvery = 8) => ScheduleBuilder.Build(
        new ScheduleSettings { PatternCount = patterns, Steps = steps, TrackerEveryModes = trackerEvery });

    /// <summary>A schedule of plain frames of one role, one a second.</summary>
    public static Schedule Plain(FrameRole role, int count) => new(
        [.. Enumerable.Range(0, count).Select(i => new ScheduledFrame(i, role, -1, -1, double.NaN, i))], timesAreMeasured: true);

    public static VirtualBench Create(
        BenchSettings settings, MeasurementManifest manifest, Schedule schedule, ImmutableArray<Complex> custom = default, int threads = 0) =>
        VirtualBench.Create(settings, manifest, schedule, custom, threads, TestContext.Current.CancellationToken);

    public static RecordedFrames Record(VirtualBench bench, int threads = 0) =>
        bench.Record(threads, cancellation: TestContext.Current.CancellationToken);

    public static ushort[] Frame(VirtualBench bench, int place)
    {
        var counts = new ushort[bench.FrameSize.PixelCount];
        bench.Render(place, counts);
        return counts;
    }

    public static float[] Light(VirtualBench bench, int place)
    {
        var electrons = new float[bench.FrameSize.PixelCount];
        bench.MeanElectrons(place, electrons);
        return electrons;
    }
}
