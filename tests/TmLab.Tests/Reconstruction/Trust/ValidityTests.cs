using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Reconstruction;
using TmLab.Simulation;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Reconstruction.Trust;

public sealed class ValidityTests
{
    private static readonly int Seeds = Environment.GetEnvironmentVariable("TMLAB_ALL_SEEDS") == "1" ? 100 : 20;
    private static readonly ScheduleSettings Plan = new() { PatternCount = 16, TrackerEveryModes = 4 };

    [Fact]
    public void A_saturated_region_of_two_per_cent_is_flagged_whatever_the_seed()
    {
        var camera = new SimulatedCamera { ElectronsPerCount = 7 };
        for (int seed = 1; seed <= Seeds; seed++)
        {
            // 5 of 256 pixels.
            var region = new PixelRectangle(seed % 11, seed % 15, 5, 1);
            TrialBench bench = TrialBench.Run(new BenchSettings { Seed = (ulong)seed, Stray = new StrayLight(region, 1e7), Camera = camera }, ScheduleBuilder.Build(Plan), Manifest());
            int[] saturated = [.. Enumerable.Range(0, 256).Where(p => bench.Facts.Pixels.Reason[p] == PixelReason.Saturated)];
            // Here and there a bright grain of the speckle fills a pixel too.
            Assert.Subset(saturated.ToHashSet(), Enumerable.Range(0, 5).Select(i => (region.Y * 16) + region.X + i).ToHashSet());
            Assert.InRange(saturated.Length, 5, 10);
            Assert.Contains($"{saturated.Length} pixels are saturated: marked invalid.", bench.Facts.Quality.Warnings);
        }
    }

    [Fact]
    public void Dead_and_hot_pixels_are_told_apart_and_counted()
    {
        var settings = new BenchSettings { Camera = new SimulatedCamera { DeadPixelCount = 3, HotPixelCount = 4 } };
        TrialBench bench = TrialBench.Run(settings, Plan, 16, 4);
        ImmutableArray<PixelReason> reason = bench.Facts.Pixels.Reason;
        Assert.Equal(bench.Truth.DeadPixels, [.. Enumerable.Range(0, 256).Where(p => reason[p] == PixelReason.Dead)]);
        Assert.Equal(bench.Truth.HotPixels, [.. Enumerable.Range(0, 256).Where(p => reason[p] == PixelReason.Hot)]);
        Assert.Equal(249, bench.Facts.Quality.ValidPixels);
        Assert.Contains("3 pixels are dead: marked invalid.", bench.Facts.Quality.Warnings);
    }

    [Fact]
    public void A_pause_in_which_the_phase_may_have_turned_is_flagged_whatever_the_seed()
    {
        // 60 s at 0.5 rad/√s: 3.9 rad r.m.s.
        for (int seed = 1; seed <= Seeds; seed++)
        {
            TrialBench bench = WithPause(seed, 60, 0.5);
            Assert.Contains(2, bench.Facts.Drift.AmbiguousGaps);
            Assert.Contains(bench.Facts.Quality.Warnings, w => w.Contains("more than π", StringComparison.Ordinal));
        }
    }

    [Fact]
    public void Gaps_of_little_drift_are_not_flagged()
    {
        int flagged = Enumerable.Range(1, Seeds).Count(seed => !WithPause(seed, 0.1, 0.5).Facts.Drift.AmbiguousGaps.IsEmpty);
        Assert.True(flagged <= 0.01 * Seeds, $"{flagged} of {Seeds}");
    }

    [Fact]
    public void The_decorrelation_time_is_found_and_a_sample_at_rest_has_none()
    {
        // First tracker at the very start, where the bench's law e^{−t/τ} holds; one per cent of noise.
        ScheduleSettings plan = new() { PatternCount = 64, TrackerEveryModes = 8, DarkFrames = 0 };
        var schedule = new Schedule(
            [.. ScheduleBuilder.Build(plan).Frames.Select(f => f.Index < 4 ? f with { TimeS = f.Index * 1e-6 } : f)], timesAreMeasured: true);
        double[] found = [.. Enumerable.Range(1, 8).Select(seed => TrialBench.Run(
            new BenchSettings { Seed = (ulong)seed, DecorrelationTimeS = 10 }, schedule, Manifest(8, 24)).Facts.Drift.Decorrelation.TimeConstantS)];
        // 576 pixels: the overlap of two independent fields is 1/√576, and moves the curve by 2 c s³/√(2 · 576) at most, 4 % of the loss.
        Assert.All(found, t => Assert.Equal(10, t, 10 * 4 * 0.04));
        Assert.Equal(10, found.Average(), 10 * 4 * 0.04 / Math.Sqrt(8));
        Assert.True(double.IsNaN(TrialBench.Run(new BenchSettings(), schedule, Manifest(8, 24)).Facts.Drift.Decorrelation.TimeConstantS));
    }

    [Fact]
    public void Light_that_the_modulator_does_not_modulate_shows_as_an_outlying_column()
    {
        var modes = new ModeDescription(BasisKind.Hadamard, HadamardOrdering.Natural, 16, new GridShape(4, 4), null, null);
        var bench = new ExactBench(modes, Schedule.ModeMajor(16, 4), new ImageSize(16, 16), 3);
        Assert.Empty(Reconstruct(bench).Quality.OutlyingModes);
        // A fringe of the same amplitude under every pattern: 5,000 counts in column 0, where the others have √(8000 · 1500/16) = 870.
        for (int f = 0; f < bench.Frames.Length; f++)
        {
            for (int p = 0; p < bench.Frames[f].Length; p++)
            {
                // A phase of its own at every pixel: a fringe common to all would look like a change of power.
                bench.Frames[f][p] += (ushort)Math.Round(10_000 * (1 + Math.Cos(bench.Facts.Schedule.Frames[f].PhaseRad + p)));
            }
        }

        TransmissionMatrixFacts facts = Reconstruct(bench);
        Assert.Equal([0], facts.Quality.OutlyingModes);
        Assert.Contains(facts.Quality.Warnings, w => w.Contains("does not modulate", StringComparison.Ordinal));
    }

    private static TransmissionMatrixFacts Reconstruct(ExactBench bench) => MatrixReconstruction.Run(
        new InMemoryFrames(bench.Frames, new ImageSize(16, 16)), bench.Facts, new ReconstructionSettings(), new InMemoryMatrix(256, 16), null, TestContext.Current.CancellationToken);

    private static MeasurementManifest Manifest(int gridSide = 4, int side = 16)
    {
        MeasurementManifest manifest = TrialBench.Manifest(side, gridSide, BasisKind.Hadamard, new SimulatedCamera());
        // A full well of 30,000 electrons at 7 a count is beyond the 4,095 counts of 12 bits.
        return side == 16 ? manifest with { Camera = manifest.Camera with { BitDepth = 12 } } : manifest;
    }

    /// <summary>A pause before the third tracker of a walk.</summary>
    private static TrialBench WithPause(int seed, double seconds, double walk)
    {
        Schedule plain = ScheduleBuilder.Build(Plan);
        int from = plain.Trackers.ElementAt(2).Frames[0];
        var schedule = new Schedule(
            [.. plain.Frames.Select(f => f.Index >= from ? f with { TimeS = f.TimeS + seconds } : f)], timesAreMeasured: true);
        var settings = new BenchSettings { Seed = (ulong)seed, PhaseDrift = [new RandomWalkDrift(walk)] };
        return TrialBench.Run(settings, schedule, TrialBench.Manifest(16, 4, BasisKind.Hadamard, settings.Camera));
    }
}
