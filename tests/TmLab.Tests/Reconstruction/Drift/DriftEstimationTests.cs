using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Reconstruction;
using TmLab.Reconstruction.Drift;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Reconstruction.Drift;

public sealed class DriftEstimationTests
{
    private static readonly ImageSize Size = new(24, 20);

    public static TheoryData<int, SteppedArm> Cases => new()
    {
        { 3, SteppedArm.Signal },
        { 4, SteppedArm.Signal },
        { 4, SteppedArm.Reference },
        { 5, SteppedArm.Reference },
    };

    [Theory]
    [MemberData(nameof(Cases))]
    public void Without_noise_the_phases_inside_every_mode_come_out_whatever_the_drift(int steps, SteppedArm arm)
    {
        Schedule schedule = TrackedSchedule.Make(32, steps, every: 8);
        double[] walk = Walk(schedule, 0.05, seed: 1);
        double[] errors = [0, 0.1, -0.15, 0.2, 0.05];
        ExactBench bench = Bench(schedule, walk, errors, arm);
        DriftFacts drift = DriftEstimation.Run(bench.Reader, bench.Facts, new ReconstructionSettings(), TestContext.Current.CancellationToken);
        Assert.Equal(DriftMethod.SmoothedPath, drift.Method);
        foreach (StepGroup group in schedule.Groups)
        {
            double[] wrong = [.. group.Frames.Select(f => Total(drift, schedule, f) - walk[f] - errors[schedule.Frames[f].Step])];
            // Rounding to counts leaves some 10⁻⁴ rad over 480 pixels; the constant of a mode is another matter.
            Assert.All(wrong, w => Assert.Equal(wrong.Average(), w, 0.002));
        }
    }

    [Fact]
    public void The_stated_uncertainty_covers_the_path_and_the_step_errors_are_found()
    {
        Schedule schedule = TrackedSchedule.Make(64, 4, every: 8);
        double[] walk = Walk(schedule, 0.05, seed: 2);
        double[] errors = [0, 0.1, -0.15, 0.2];
        ExactBench bench = Bench(schedule, walk, errors, SteppedArm.Signal);
        DriftFacts drift = DriftEstimation.Run(bench.Reader, bench.Facts, new ReconstructionSettings(), TestContext.Current.CancellationToken);
        int[] frames = [.. schedule.Frames.Where(f => f.IsStepped).Select(f => f.Index)];
        double offset = drift.FramePhaseRad[frames[0]] - walk[frames[0]];
        double squares = frames.Average(f => Math.Pow((drift.FramePhaseRad[f] - walk[f] - offset) / Math.Max(drift.FramePhaseSdRad[f], 1e-3), 2));
        // Eight free bridges of nine gaps: the mean square of the standardised error is 1 ± √(2/8) or so, 4 standard errors.
        Assert.InRange(squares, 0, 1 + (4 * Math.Sqrt(2.0 / 8)));
        // A step error that looks like drift is told from it only as well as the walk allows: 0.05/√72 a step.
        Assert.All(errors.Skip(1).Select((e, s) => (e, drift.StepErrorRad[s + 1])), p => Assert.Equal(p.e, p.Item2, 4 * 0.05 * Math.Sqrt(3.0 / 72)));
        // The walk's rate: 72 groups of three increments, frames 1 s apart.
        Assert.Equal(0.05 * 0.05, drift.WalkRateRad2PerS, 0.05 * 0.05 * 4 * Math.Sqrt(2.0 / 216));
    }

    [Fact]
    public void Steps_recorded_one_after_the_other_over_all_modes_are_followed_too()
    {
        Schedule order = Schedule.StepMajor(16, 4);
        double[] walk = Walk(order, 0.01, seed: 3);
        ExactBench bench = Bench(order, walk, [0, 0, 0, 0], SteppedArm.Signal, modes: 16);
        DriftFacts drift = DriftEstimation.Run(bench.Reader, bench.Facts, new ReconstructionSettings(), TestContext.Current.CancellationToken);
        Assert.Equal(DriftMethod.SmoothedPath, drift.Method);
        double before = Spread(order, (f, s) => walk[f]);
        double after = Spread(order, (f, s) => walk[f] - drift.FramePhaseRad[f] - drift.StepErrorRad[s]);
        Assert.True(after < 0.1 * before, $"{after} rad of {before} rad are left inside the modes");
    }

    [Fact]
    public void Power_that_wanders_is_found()
    {
        Schedule schedule = TrackedSchedule.Make(32, 4, every: 8);
        var power = new Random(4);
        double[] gains = [.. schedule.Frames.Select(_ => 1 + (0.03 * ((2 * power.NextDouble()) - 1)))];
        ExactBench bench = Bench(schedule, Walk(schedule, 0.05, seed: 5), [0, 0, 0, 0], SteppedArm.Signal);
        for (int f = 0; f < bench.Frames.Length; f++)
        {
            bench.Frames[f] = [.. bench.Frames[f].Select(c => (ushort)Math.Round(c * gains[f]))];
        }

        var reader = new InMemoryFrames(bench.Frames, Size);
        DriftFacts drift = DriftEstimation.Run(reader, bench.Facts, new ReconstructionSettings(), TestContext.Current.CancellationToken);
        double scale = drift.FrameGain.Average() / gains.Average();
        Assert.All(schedule.Frames, f => Assert.Equal(gains[f.Index] * scale, drift.FrameGain[f.Index], 0.003));
    }

    [Fact]
    public void Too_few_modes_for_the_model_fall_back_to_what_the_trackers_say()
    {
        Schedule schedule = TrackedSchedule.Make(4, 4, every: 4);
        ExactBench bench = Bench(schedule, new double[schedule.Frames.Length], [0, 0, 0, 0], SteppedArm.Signal, modes: 4);
        DriftFacts drift = DriftEstimation.Run(bench.Reader, bench.Facts, new ReconstructionSettings(), TestContext.Current.CancellationToken);
        Assert.Equal(DriftMethod.TrackersInterpolated, drift.Method);
    }

    private static double Total(DriftFacts drift, Schedule schedule, int frame) =>
        drift.FramePhaseRad[frame] + drift.StepErrorRad[schedule.Frames[frame].Step];

    // R.m.s. deviation of the frames' phases from their mode's mean.
    private static double Spread(Schedule schedule, Func<int, int, double> phase) => Math.Sqrt(schedule.Groups.Average(g =>
    {
        double[] values = [.. g.Frames.Select(f => phase(f, schedule.Frames[f].Step))];
        return values.Average(v => Math.Pow(v - values.Average(), 2));
    }));

    private static ExactBench Bench(Schedule schedule, double[] walk, double[] errors, SteppedArm arm, int modes = 0)
    {
        int count = modes > 0 ? modes : schedule.Modes.Count();
        (int rows, int columns) = count == 4 ? (2, 2) : (count / 8, 8);
        var description = new ModeDescription(BasisKind.Hadamard, HadamardOrdering.Natural, count, new GridShape(rows, columns), null, null);
        return new ExactBench(description, schedule, Size, 9, arm, f => f.IsStepped ? walk[f.Index] + errors[f.Step] : 0);
    }

    private static double[] Walk(Schedule schedule, double sdPerFrame, int seed)
    {
        var random = new Random(seed);
        double phase = 0;
        return [.. schedule.Frames.Select(_ => phase += sdPerFrame * Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble()))];
    }
}
