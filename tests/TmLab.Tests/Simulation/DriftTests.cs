using TmLab.Measurement;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

public sealed class DriftTests
{
    [Fact]
    public void The_random_walk_has_increments_of_the_stated_variance_that_do_not_depend_on_each_other()
    {
        // Wiener process: Var(Δφ) = rate² Δt. Standard error of a variance of n normal numbers: √(2/n).
        const int Count = 20_000;
        double[] phase = Phases(new RandomWalkDrift(0.5), Count, frameRateHz: 50);
        double[] steps = [.. phase.Skip(1).Zip(phase, (later, earlier) => later - earlier)];
        double expected = 0.25 / 50;
        double bound = 4 * Math.Sqrt(2.0 / Count);
        Assert.Equal(0, phase[0]);
        Assert.InRange(steps.Average(s => s * s), expected * (1 - bound), expected * (1 + bound));
        double neighbours = steps.Skip(1).Zip(steps, (a, b) => a * b).Average() / expected;
        Assert.InRange(neighbours, -4 / Math.Sqrt(Count), 4 / Math.Sqrt(Count));
    }

    [Fact]
    public void The_random_walk_does_not_depend_on_the_frame_rate_but_on_time()
    {
        // After 1 s: variance rate², over many seeds.
        double[] ends = [.. Enumerable.Range(1, 400).Select(seed => Phases(new RandomWalkDrift(2), 11, 10, (ulong)seed)[10])];
        Assert.InRange(ends.Average(e => e * e), 4 * (1 - (4 * Math.Sqrt(2.0 / 400))), 4 * (1 + (4 * Math.Sqrt(2.0 / 400))));
    }

    [Fact]
    public void Swings_jumps_and_slopes_are_exact_and_add_up()
    {
        PhaseDrift[] causes = [new SinusoidalDrift(0.4, 3, 0.2), new JumpDrift(0.05, -1.5), new LinearDrift(2)];
        double[] sum = Phases(causes, 20, 100);
        for (int frame = 0; frame < sum.Length; frame++)
        {
            double t = frame / 100.0;
            double expected = (0.4 * Math.Sin((2 * Math.PI * 3 * t) + 0.2)) + (t >= 0.05 ? -1.5 : 0) + (2 * t);
            Assert.Equal(expected, sum[frame], 1e-12);
        }
    }

    [Fact]
    public void Two_walks_are_independent()
    {
        double[] one = Phases(new RandomWalkDrift(1), 5000, 1);
        double[] two = Phases([new RandomWalkDrift(1), new RandomWalkDrift(1)], 5000, 1);
        double[] second = [.. two.Zip(one, (sum, first) => sum - first)];
        double product = Increments(one).Zip(Increments(second), (a, b) => a * b).Average();
        Assert.InRange(product, -4 / Math.Sqrt(5000), 4 / Math.Sqrt(5000));
        Assert.InRange(Increments(second).Average(s => s * s), 1 - (4 * Math.Sqrt(2.0 / 5000)), 1 + (4 * Math.Sqrt(2.0 / 5000)));
    }

    [Fact]
    public void Power_drifts_and_flickers_as_stated_and_scales_the_light()
    {
        BenchSettings settings = new() { Power = new PowerDrift(LinearPerSecond: -0.001, FrameNoise: 0.02), Camera = Benches.Ideal };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(4, 2), Benches.Plain(FrameRole.Reference, 500));
        double[] noise = [.. bench.Truth.Power.Select((p, t) => p - (1 - (0.001 * t)))];
        Assert.InRange(noise.Average(n => n * n) / 0.0004, 1 - (4 * Math.Sqrt(2.0 / 500)), 1 + (4 * Math.Sqrt(2.0 / 500)));
        Assert.Equal(4000 * bench.Truth.Power[77], Benches.Light(bench, 77)[3], 1e-2);
    }

    private static double[] Phases(PhaseDrift cause, int count, double frameRateHz, ulong seed = 5) => Phases([cause], count, frameRateHz, seed);

    private static double[] Phases(PhaseDrift[] causes, int count, double frameRateHz, ulong seed = 5)
    {
        var schedule = new Schedule(
            [.. Enumerable.Range(0, count).Select(i => new ScheduledFrame(i, FrameRole.Reference, -1, -1, double.NaN, i / frameRateHz))], true);
        using VirtualBench bench = Benches.Create(
            new BenchSettings { PhaseDrift = [.. causes], Seed = seed }, Benches.Manifest(2, 1), schedule);
        return [.. bench.Truth.DriftPhaseRad];
    }

    private static IEnumerable<double> Increments(double[] path) => path.Skip(1).Zip(path, (later, earlier) => later - earlier);
}
