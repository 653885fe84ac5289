using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Reconstruction.Trust;

/// <summary>
/// Frames that went wrong between camera and file are found and named. By default 25 seeds a kind; with the environment variable
/// TMLAB_ALL_SEEDS=1 the 100 of the detection figures.
/// </summary>
public sealed class FrameFindingTests
{
    private const int Steps = 5;
    private static readonly int Seeds = Environment.GetEnvironmentVariable("TMLAB_ALL_SEEDS") == "1" ? 100 : 25;

    private static readonly ScheduleSettings Plan = new() { PatternCount = 16, Steps = Steps, TrackerEveryModes = 4 };

    [Theory]
    [InlineData(FrameFaultKind.Dropped, FrameFindingKind.Dropped)]
    [InlineData(FrameFaultKind.Duplicated, FrameFindingKind.Duplicated)]
    [InlineData(FrameFaultKind.Stale, FrameFindingKind.Stale)]
    [InlineData(FrameFaultKind.Swapped, FrameFindingKind.Swapped)]
    [InlineData(FrameFaultKind.Shaken, FrameFindingKind.Shaken)]
    public void A_faulty_frame_is_found_and_named_whatever_the_seed(FrameFaultKind fault, FrameFindingKind expected)
    {
        List<string> missed = [];
        for (int seed = 1; seed <= Seeds; seed++)
        {
            int frame = FrameOf(seed);
            ImmutableArray<FrameFinding> found = Run((ulong)seed, [new FrameFault(fault, frame)]).Facts.Quality.Frames;
            if (found.Length != 1 || found[0].Kind != expected || !found[0].Frames.Contains(frame))
            {
                missed.Add($"seed {seed}, frame {frame}: {string.Join("; ", found.Select(f => f.Sentence))}");
            }
        }

        Assert.Empty(missed);
    }

    [Fact]
    public void Clean_measurements_raise_no_alarm()
    {
        int alarms = Enumerable.Range(1, Seeds).Count(seed => !Run((ulong)(1000 + seed), []).Facts.Quality.Frames.IsEmpty);
        Assert.True(alarms <= 0.01 * Seeds, $"{alarms} of {Seeds}");
    }

    [Fact]
    public void A_lost_pattern_costs_its_share_of_the_matrix_and_no_more()
    {
        TrialBench bench = Run(7, [new FrameFault(FrameFaultKind.Shaken, FrameOf(7))]);
        Assert.Single(bench.Facts.Quality.LostPatterns);
        Assert.Equal(1 / 16.0, bench.Facts.Quality.Budget.Excluded, 1e-9);
        Assert.Equal(bench.Facts.Quality.Budget.Fidelity, bench.TrueFidelity, 0.01);
    }

    [Fact]
    public void A_shift_is_undone()
    {
        TrialBench bench = Run(8, [new FrameFault(FrameFaultKind.Duplicated, FrameOf(8))]);
        Assert.Empty(bench.Facts.Quality.LostPatterns);
        Assert.Equal(16, bench.Facts.Quality.ValidModes);
        Assert.True(bench.TrueFidelity > 0.97, $"fidelity {bench.TrueFidelity}");
    }

    // Any frame of a mode but the last few: a frame lost at the very end and a copy in its place are the same thing.
    private static int FrameOf(int seed)
    {
        ScheduledFrame[] modes = [.. ScheduleBuilder.Build(Plan).Frames.Where(f => f.Role == FrameRole.Mode)];
        return modes[1 + (int)((uint)seed * 2654435761u % (uint)(modes.Length - Steps - 1))].Index;
    }

    private static TrialBench Run(ulong seed, ImmutableArray<FrameFault> faults)
    {
        var settings = new BenchSettings
        {
            Seed = seed, MeanSignalElectrons = 500, PhaseDrift = [new RandomWalkDrift(0.5)], Faults = faults, Steps = new StepError(0.03),
        };
        return TrialBench.Run(settings, Plan, 16, 4);
    }
}
