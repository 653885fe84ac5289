using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Simulation;
using TmLab.Storage.Bench;
using TmLab.Storage.Ingest;
using TmLab.Storage.Manifest;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Ingest;

public sealed class MergedMeasurementTests : IDisposable
{
    private static readonly PlanSettings s_settings = new()
    {
        Modes = new ModeDescription(BasisKind.Hadamard, HadamardOrdering.Natural, 16, new GridShape(4, 4), null, null),
        Camera = new PlannedCamera(new ImageSize(8, 6), 12, 7.5, 1.6, 30_000, 64),
        TrackerEveryModes = 4,
    };

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData(5)]
    [InlineData(40)]
    [InlineData(60)]
    public void A_measurement_split_anywhere_and_joined_is_the_whole_one(int firstFrames)
    {
        // Cut behind a whole group, so that each part is a measurement of its own.
        Schedule schedule = s_settings.BuildSchedule(4);
        int cut = 16 + (firstFrames / 4 * 4);
        string whole = Record("whole", schedule, _ => true);
        string first = Record("first", schedule, f => f < cut);
        string second = Record("second", schedule, f => f >= cut);

        (ImmutableArray<ScheduledFrame> Rows, ushort[][] Frames) expected = Read(MeasurementFolder.Open(whole));
        (ImmutableArray<ScheduledFrame> Rows, ushort[][] Frames) joined = Read(MergedMeasurement.Open(first, second));

        Assert.Equal(expected.Rows.AsEnumerable(), joined.Rows);
        Assert.Equal(expected.Frames, joined.Frames);
    }

    [Fact]
    public void Patterns_shown_again_take_the_place_of_the_first_and_times_go_on()
    {
        string first = Record("first", s_settings.BuildSchedule(4), _ => true);
        Schedule again = (s_settings with { RepairPatterns = [3, 9] }).BuildSchedule(4);
        string second = Record("second", again, _ => true, seed: 2);

        (ImmutableArray<ScheduledFrame> Rows, ushort[][] Frames) joined = Read(MergedMeasurement.Open(first, second));

        int firstCount = s_settings.BuildSchedule(4).Frames.Length;
        Assert.Equal(firstCount - (2 * 4) + again.Frames.Length, joined.Rows.Length);
        Assert.All(new[] { 3, 9 }, k => Assert.All(
            joined.Rows.Where(f => f.Role == FrameRole.Mode && f.Mode == k), f => Assert.True(f.Index >= firstCount - 8)));
        Assert.Equal(16 * 4, joined.Rows.Count(f => f.Role == FrameRole.Mode));
        Assert.All(joined.Rows.Zip(joined.Rows.Skip(1)), p => Assert.True(p.Second.TimeS > p.First.TimeS));
        ushort[][] frames = Read(MeasurementFolder.OpenPart(second)).Frames;
        Assert.Equal(frames, joined.Frames[(firstCount - 8)..]);
    }

    [Fact]
    public void Recordings_of_different_benches_are_refused_with_all_differences()
    {
        string first = Record("first", s_settings.BuildSchedule(4), _ => true);
        PlanSettings other = s_settings with
        {
            Steps = 5,
            StepDevice = StepDevice.ReferenceArm,
            Camera = s_settings.Camera with { BitDepth = 10, ElectronsPerCount = 30 },
        };
        string second = Record("second", other.BuildSchedule(4), _ => true, settings: other);
        ImmutableArray<InputProblem> problems = Assert.Throws<BadInputException>(() => MergedMeasurement.Open(first, second)).Problems;
        Assert.Equal(["camera.bit_depth", "camera.electrons_per_count", "phase_steps.arm", "schedule"], problems.Select(p => p.Place));
    }

    [Fact]
    public void Recordings_that_no_tracker_ties_are_refused()
    {
        string first = Record("first", s_settings.BuildSchedule(4), _ => true);
        string second = Record("second", (s_settings with { RepairPatterns = [3] }).BuildSchedule(0), _ => true);
        InputProblem problem = Assert.Single(Assert.Throws<BadInputException>(() => MergedMeasurement.Open(first, second)).Problems);
        Assert.Contains("tracker", problem.Found, StringComparison.Ordinal);
    }

    [Fact]
    public void Patterns_that_neither_has_are_named()
    {
        string first = Record("first", (s_settings with { RepairPatterns = [0, 1, 2, 3] }).BuildSchedule(4), _ => true);
        string second = Record("second", (s_settings with { RepairPatterns = [5, 6] }).BuildSchedule(4), _ => true);
        InputProblem problem = Assert.Single(Assert.Throws<BadInputException>(() => MergedMeasurement.Open(first, second)).Problems);
        Assert.Contains("10 of 16 modes have no frames: 4, 7, 8, 9, 10", problem.Found, StringComparison.Ordinal);
    }

    [Fact]
    public void Frames_written_as_tiff_read_back_as_the_raw_ones()
    {
        Schedule schedule = s_settings.BuildSchedule(4);
        string raw = Record("raw", schedule, _ => true);
        string tiff = Record("tiff", schedule, _ => true, storage: FrameStorageKind.Tiff);
        Assert.Equal(Read(MeasurementFolder.Open(raw)).Frames, Read(MeasurementFolder.Open(tiff)).Frames);
    }

    /// <summary>Records part of a schedule on one bench whose light and noise do not depend on the part.</summary>
    private string Record(
        string name, Schedule schedule, Func<int, bool> keep, ulong seed = 1, PlanSettings? settings = null, FrameStorageKind storage = FrameStorageKind.Raw)
    {
        PlanSettings bench = settings ?? s_settings;
        MeasurementManifest manifest = MeasurementPlan.Make(bench).Manifest;
        string folder = _folder.File(name);
        var plan = new OpenedPlan("measurement.json", manifest, schedule, [], null, []);
        using var source = VirtualBench.Create(new BenchSettings { Seed = seed }, manifest, schedule, cancellation: TestContext.Current.CancellationToken);
        SimulatedFolder.Write(folder, false, plan, source, storage, 1, cancel: TestContext.Current.CancellationToken);
        if (schedule.Frames.All(f => keep(f.Index)))
        {
            return folder;
        }

        int frameBytes = 2 * source.FrameSize.PixelCount;
        byte[] all = File.ReadAllBytes(Path.Combine(folder, MeasurementPlan.FramesFile));
        ScheduledFrame[] kept = [.. schedule.Frames.Where(f => keep(f.Index))];
        File.WriteAllBytes(
            Path.Combine(folder, MeasurementPlan.FramesFile), [.. kept.SelectMany(f => all.AsSpan(f.Index * frameBytes, frameBytes).ToArray())]);
        var part = new Schedule([.. kept.Select((f, i) => f with { Index = i })], timesAreMeasured: true);
        File.WriteAllText(Path.Combine(folder, MeasurementPlan.ScheduleFile), ScheduleCsv.Write(part));
        return folder;
    }

    private static (ImmutableArray<ScheduledFrame> Rows, ushort[][] Frames) Read(OpenedMeasurement measurement)
    {
        using (measurement)
        {
            ushort[][] frames = new ushort[measurement.Frames.FrameCount][];
            for (int f = 0; f < frames.Length; f++)
            {
                frames[f] = new ushort[measurement.Frames.FrameSize.PixelCount];
                measurement.Frames.ReadNext(frames[f]);
            }

            return (measurement.Schedule.Frames, frames);
        }
    }
}
