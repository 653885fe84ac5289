using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

public sealed class VirtualBenchTests
{
    private static readonly BenchSettings Busy = new()
    {
        Seed = 7,
        Grain = new SpeckleGrain(2.5),
        BallisticFraction = 0.2,
        Reference = new ReferenceBeam(ReferenceShape.Speckle),
        PhaseDrift = [new RandomWalkDrift(1), new SinusoidalDrift(0.3, 2), new JumpDrift(0.5, 1)],
        Power = new PowerDrift(-0.01, 0.01, 0.01),
        DecorrelationTimeS = 3,
        Steps = new StepError(0.02, [0, 0.1, 0, -0.1], 0.02),
        Faults = [new FrameFault(FrameFaultKind.Swapped, 11)],
        Camera = new SimulatedCamera { DeadPixelCount = 2, HotPixelCount = 2 },
    };

    [Theory]
    [InlineData(BasisKind.Hadamard, SteppedArm.Signal)]
    [InlineData(BasisKind.Hadamard, SteppedArm.Reference)]
    [InlineData(BasisKind.HadamardBinary, SteppedArm.Signal)]
    [InlineData(BasisKind.Fourier, SteppedArm.Signal)]
    [InlineData(BasisKind.Fourier, SteppedArm.Reference)]
    [InlineData(BasisKind.Pixel, SteppedArm.Signal)]
    [InlineData(BasisKind.Custom, SteppedArm.Reference)]
    public void Textbook_demodulation_of_light_without_noise_gives_the_field_times_the_conjugate_reference(BasisKind basis, SteppedArm arm)
    {
        // D = (1/S) Σ I e^{−iδ}, the N-bucket formula (Schwider et al., Appl. Opt. 22, 3421 (1983)), with δ of the signal arm.
        const int Modes = 16;
        const int Steps = 5;
        ImmutableArray<Complex> custom = basis == BasisKind.Custom ? CustomPatterns(Modes) : default;
        BenchSettings settings = Busy with
        {
            DecorrelationTimeS = double.PositiveInfinity, Faults = [], Power = new PowerDrift(), Steps = new StepError(), PhaseDrift = [],
        };
        Schedule schedule = Benches.Schedule(Modes, Steps);
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(12, 4, basis, arm), schedule, custom);
        foreach (StepGroup group in schedule.Modes)
        {
            Complex[] found = Demodulate(bench, schedule, group, arm == SteppedArm.Signal ? 1 : -1);
            Complex[] expected = ExpectedField(bench, PatternRow(basis, group.Mode, custom));
            AssertClose(found, expected);
        }
    }

    [Fact]
    public void Drift_turns_the_demodulated_field_by_its_phase_and_power_scales_it()
    {
        Schedule schedule = Benches.Schedule(16, 4);
        BenchSettings settings = Busy with
        {
            DecorrelationTimeS = double.PositiveInfinity, Faults = [], Steps = new StepError(),
            PhaseDrift = [new JumpDrift(0.04, 0.7)], Power = new PowerDrift(),
        };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(12, 4), schedule);
        StepGroup group = schedule.Modes.ElementAt(5);
        Complex turn = Complex.FromPolarCoordinates(1, 0.7);
        AssertClose(
            Demodulate(bench, schedule, group, 1), [.. ExpectedField(bench, PatternRow(BasisKind.Hadamard, 5, default)).Select(d => d * turn)]);
    }

    [Fact]
    public void The_step_error_is_in_the_truth_and_in_the_light()
    {
        Schedule schedule = Benches.Schedule(16, 4);
        using VirtualBench bench = Benches.Create(
            Busy with { Faults = [], DecorrelationTimeS = double.PositiveInfinity }, Benches.Manifest(12, 4), schedule);
        ScheduledFrame frame = schedule.Frames.First(f => f.Role == FrameRole.Mode && f.Mode == 3 && f.Step == 1);
        double step = bench.Truth.StepPhaseRad[frame.Index];
        Assert.InRange(step - ((frame.PhaseRad * 1.02) + 0.1), -0.08, 0.08);
        Complex arm = Complex.FromPolarCoordinates(1, step + bench.Truth.DriftPhaseRad[frame.Index]);
        Complex[] field = SignalField(bench, PatternRow(BasisKind.Hadamard, 3, default));
        float[] light = Benches.Light(bench, frame.Index);
        for (int p = 0; p < light.Length; p++)
        {
            Complex sum = bench.Truth.ReferenceField[p].ToComplex() + (field[p] * arm);
            double expected = bench.Truth.Power[frame.Index] * Complex.Abs(sum) * Complex.Abs(sum);
            Assert.InRange(light[p], expected - 0.05, expected + 0.05);
        }
    }

    [Fact]
    public void Frames_are_the_same_bytes_for_any_number_of_threads_and_any_order()
    {
        Schedule schedule = Benches.Schedule(16);
        using VirtualBench one = Benches.Create(Busy, Benches.Manifest(13, 4), schedule, threads: 1);
        using VirtualBench two = Benches.Create(Busy, Benches.Manifest(13, 4), schedule, threads: 2);
        using RecordedFrames a = Benches.Record(one, 1);
        using RecordedFrames b = Benches.Record(two, 2);
        using IFrameSource source = two.OpenFrames();
        for (int frame = one.FrameCount - 1; frame >= 0; frame--)
        {
            Assert.Equal(a.Frame(frame).ToArray(), Benches.Frame(two, frame));
            Assert.Equal(a.Frame(frame).ToArray(), b.Frame(frame).ToArray());
        }

        AssertSourceDelivers(source, a);
    }

    [Fact]
    public void Another_seed_gives_other_frames_and_no_effect_disturbs_the_medium()
    {
        Schedule schedule = Benches.Schedule(16);
        MeasurementManifest manifest = Benches.Manifest(12, 4);
        using VirtualBench bench = Benches.Create(Busy, manifest, schedule);
        using VirtualBench other = Benches.Create(Busy with { Seed = 8 }, manifest, schedule);
        using VirtualBench still = Benches.Create(Busy with { PhaseDrift = [], Power = new PowerDrift() }, manifest, schedule);
        Assert.NotEqual(Benches.Frame(bench, 20), Benches.Frame(other, 20));
        Assert.Equal(bench.Truth.Matrix.Buffer.AsSpan().ToArray(), still.Truth.Matrix.Buffer.AsSpan().ToArray());
    }

    [Theory]
    [InlineData(FrameRole.Dark)]
    [InlineData(FrameRole.Reference)]
    [InlineData(FrameRole.Blank)]
    public void Frames_without_modes_show_what_their_role_says(FrameRole role)
    {
        BenchSettings settings = Busy with { Power = new PowerDrift(), Faults = [], DecorrelationTimeS = double.PositiveInfinity };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(12, 4), Benches.Plain(role, 2));
        Complex[] field = role switch
        {
            FrameRole.Dark => new Complex[144],
            FrameRole.Reference => [.. bench.Truth.ReferenceField.Select(r => r.ToComplex())],
            _ => SignalField(bench, PatternRow(BasisKind.Hadamard, 0, default)),
        };
        float[] light = Benches.Light(bench, 1);
        for (int p = 0; p < light.Length; p++)
        {
            Assert.Equal(field[p].Magnitude * field[p].Magnitude, light[p], 1e-5 * (1 + light[p]));
        }
    }

    [Fact]
    public void Decorrelation_keeps_the_stated_share_of_the_field_and_the_mean_power()
    {
        // g1(t) = e^{−t/τ}; the squared overlap of independent Gaussian fields over n pixels has mean 1/n, its sd about the same.
        BenchSettings settings = new() { DecorrelationTimeS = 2, Camera = Benches.Ideal };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(64, 4), Benches.Plain(FrameRole.Blank, 8));
        float[] start = Benches.Light(bench, 0);
        float[] later = Benches.Light(bench, 3);
        double correlation = (start.Zip(later, (a, b) => (double)a * b).Average() / (start.Average(x => (double)x) * later.Average(x => (double)x))) - 1;
        // Siegert: g2 − 1 = |g1|² = e^{−3}; sd of the estimate over 4096 independent speckles ≈ √(1/n)(1 + few |g1|²).
        Assert.InRange(correlation, Math.Exp(-3) - (4 * 1.3 / 64), Math.Exp(-3) + (4 * 1.3 / 64));
        Assert.InRange(later.Average(), 1000 * (1 - (4 / 64.0)), 1000 * (1 + (4 / 64.0)));
        Assert.Equal(Math.Exp(-1.5), bench.Truth.FieldCorrelation[3], 1e-12);
    }

    [Fact]
    public void Unscattered_light_does_not_decorrelate()
    {
        BenchSettings settings = new() { BallisticFraction = 1, DecorrelationTimeS = 0.1, Camera = Benches.Ideal };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(16, 4), Benches.Plain(FrameRole.Blank, 3));
        float[] start = Benches.Light(bench, 0);
        float[] later = Benches.Light(bench, 2);
        Assert.All(start.Zip(later), pair => Assert.Equal(pair.First, pair.Second, 1e-3 + (1e-4 * pair.First)));
        Assert.InRange(start.Average(), 900, 1100);
    }

    [Fact]
    public void Impossible_benches_are_refused()
    {
        Schedule schedule = Benches.Schedule(16);
        MeasurementManifest manifest = Benches.Manifest(12, 4);
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(new BenchSettings { MeanSignalElectrons = double.NaN }, manifest, schedule));
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(new BenchSettings { DecorrelationTimeS = 0 }, manifest, schedule));
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(new BenchSettings(), manifest, Benches.Schedule(17)));
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(
            new BenchSettings { Faults = [new FrameFault(FrameFaultKind.Dropped, 5000)] }, manifest, schedule));
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(
            new BenchSettings { Stray = new StrayLight(new PixelRectangle(10, 10, 3, 3), 1) }, manifest, schedule));
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(
            new BenchSettings(), manifest with { Modes = manifest.Modes with { Basis = BasisKind.Custom } }, schedule));
        Assert.ThrowsAny<ArgumentException>(() => Benches.Create(
            new BenchSettings(), manifest with { Camera = manifest.Camera with { Size = null } }, schedule));
    }

    private static void AssertSourceDelivers(IFrameSource source, RecordedFrames expected)
    {
        var counts = new ushort[expected.FrameSize.PixelCount];
        for (int frame = 0; frame < expected.FrameCount; frame++)
        {
            source.ReadNext(counts);
            Assert.Equal(expected.Frame(frame).ToArray(), counts);
        }

        Assert.Throws<InvalidOperationException>(() => source.ReadNext(counts));
    }

    private static Complex[] Demodulate(VirtualBench bench, Schedule schedule, StepGroup group, int sign)
    {
        var sum = new Complex[bench.FrameSize.PixelCount];
        foreach (int frame in group.Frames)
        {
            Complex factor = Complex.FromPolarCoordinates(1.0 / group.Frames.Length, -sign * schedule.Frames[frame].PhaseRad);
            float[] light = Benches.Light(bench, frame);
            for (int p = 0; p < sum.Length; p++)
            {
                sum[p] += light[p] * factor;
            }
        }

        return sum;
    }

    private static Complex[] ExpectedField(VirtualBench bench, Complex[] row) =>
        [.. SignalField(bench, row).Select((e, p) => Complex.Conjugate(bench.Truth.ReferenceField[p].ToComplex()) * e)];

    private static Complex[] SignalField(VirtualBench bench, Complex[] row)
    {
        var field = new Complex[bench.FrameSize.PixelCount];
        for (int p = 0; p < field.Length; p++)
        {
            for (int n = 0; n < row.Length; n++)
            {
                field[p] += row[n] * bench.Truth.Matrix[p, n].ToComplex();
            }
        }

        return field;
    }

    /// <summary>The definitions of conventions, written out again and apart from the program, for a 4 × 4 grid.</summary>
    private static Complex[] PatternRow(BasisKind basis, int k, ImmutableArray<Complex> custom) =>
    [
        .. Enumerable.Range(0, 16).Select(n => basis switch
        {
            BasisKind.Hadamard => Sylvester(k, n),
            BasisKind.HadamardBinary => (1 + Sylvester(k, n)) / 2,
            BasisKind.Fourier => Complex.Exp(2 * Math.PI * Complex.ImaginaryOne * ((k / 4 * (n / 4) / 4.0) + (k % 4 * (n % 4) / 4.0))),
            BasisKind.Pixel => k == n ? 1 : 0,
            _ => custom[(k * 16) + n],
        }),
    ];

    private static Complex Sylvester(int k, int n) => int.IsEvenInteger(BitOperations.PopCount((uint)(k & n))) ? 1 : -1;

    private static ImmutableArray<Complex> CustomPatterns(int modes) =>
        [.. Enumerable.Range(0, modes * modes).Select(i => new Complex(Math.Cos(i * 0.7), Math.Sin(i * i * 0.3)))];

    /// <summary>Single-precision light: five frames of up to a few 10⁴ electrons, each rounded to 6e-8 of a few sums.</summary>
    private static void AssertClose(Complex[] found, Complex[] expected)
    {
        double scale = expected.Max(Complex.Abs);
        for (int p = 0; p < expected.Length; p++)
        {
            Assert.InRange(Complex.Abs(found[p] - expected[p]), 0, 2e-6 * scale * 5);
        }
    }
}
