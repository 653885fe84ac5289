using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Reconstruction;
using TmLab.Simulation;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Planning;

/// <summary>A plan predicts what the virtual bench and the reconstruction then give. The table is printed.</summary>
public sealed class PredictionTests(ITestOutputHelper output)
{
    /// <summary>Promised accuracy where drift is not extreme and the signal is not lost in noise.</summary>
    private const double Accuracy = 0.02;

    private static readonly PlanSettings s_standard = new()
    {
        Camera = new PlannedCamera(new ImageSize(32, 32), 12, 7.5, 1.6, 30_000, 64),
        Modulator = new ModulatorDescription(ModulatorKind.Phase, new ImageSize(64, 64), new PixelRectangle(0, 0, 64, 64), null, null, null),
    };

    private static readonly ImmutableArray<(string Name, PlanSettings Settings)> s_cases =
    [
        ("as it stands", s_standard),
        ("strong drift", s_standard with { DriftRadPerSqrtSecond = 0.8 }),
        ("faint", s_standard with { SignalElectrons = 10, ReferenceElectrons = 40 }),
        ("three steps", s_standard with { Steps = 3 }),
        ("six steps, 8 bits", s_standard with { Steps = 6, Camera = new PlannedCamera(new ImageSize(32, 32), 8, 120, 2, 30_000, 4) }),
        ("fourier 8 × 12", s_standard with { Modes = Modes(BasisKind.Fourier, 8, 12) }),
        ("on/off", Amplitude(s_standard) with { Modes = Modes(BasisKind.HadamardBinary, 16, 16) }),
        ("single macro-pixels", Amplitude(s_standard) with { Modes = Modes(BasisKind.Pixel, 8, 8), SignalElectrons = 4000 }),
        ("sample moves", s_standard with { DecorrelationTimeS = 100 }),
        ("trackers seldom", s_standard with { TrackerEveryModes = 64 }),
    ];

    [Fact]
    public void Predicted_and_true_fidelity_agree()
    {
        output.WriteLine($"{"setting",-22}{"predicted",10}{"true",10}{"difference",12}");
        (string Name, double Predicted, double True)[] rows = [.. s_cases.Select((c, i) => Row(c.Name, c.Settings, seed: 40 + i))];
        foreach ((string name, double predicted, double found) in rows)
        {
            output.WriteLine(FormattableString.Invariant($"{name,-22}{predicted,10:F4}{found,10:F4}{predicted - found,12:F4}"));
        }

        Assert.All(rows, r => Assert.InRange(r.Predicted - r.True, -Accuracy, Accuracy));
    }

    private static ModeDescription Modes(BasisKind basis, int rows, int columns) =>
        new(basis, HadamardOrdering.Natural, rows * columns, new GridShape(rows, columns), null, null);

    private static PlanSettings Amplitude(PlanSettings settings) => settings with
    {
        Modulator = settings.Modulator with { Kind = ModulatorKind.Amplitude },
        StepDevice = StepDevice.ReferenceArm,
    };

    private static (string Name, double Predicted, double True) Row(string name, PlanSettings settings, int seed)
    {
        var plan = MeasurementPlan.Make(settings);
        using var bench = VirtualBench.Create(BenchFor(settings, seed), plan.Manifest, plan.Schedule);
        using RecordedFrames frames = bench.Record();
        ImageSize size = settings.Camera.Size;
        var facts = new MeasurementFacts(
            plan.Manifest, size, plan.Schedule, [.. plan.Schedule.Frames.Select(_ => default(FrameFacts))],
            Dark(frames, plan.Schedule), [], null, []);
        var matrix = new InMemoryMatrix(size.PixelCount, settings.Modes.ModeCount);
        TransmissionMatrixFacts found = MatrixReconstruction.Run(frames, facts, new ReconstructionSettings(), matrix, null, CancellationToken.None);
        double fidelity = Enumerable.Range(0, size.PixelCount).Where(p => found.Pixels.Valid[p])
            .Average(p => RowFidelity(matrix.Row(p), bench.Truth.Matrix.Row(p)));
        return (name, plan.Budget.Fidelity, fidelity);
    }

    private static BenchSettings BenchFor(PlanSettings settings, int seed) => new()
    {
        Seed = (ulong)seed,
        Grain = new SpeckleGrain(2),
        MeanSignalElectrons = settings.SignalElectrons,
        Reference = new ReferenceBeam(IntensityRatio: settings.ReferenceElectrons / settings.SignalElectrons),
        Camera = new SimulatedCamera
        {
            ElectronsPerCount = settings.Camera.ElectronsPerCount,
            OffsetCounts = settings.Camera.OffsetCounts,
            ReadNoiseElectrons = settings.Camera.ReadNoiseElectrons,
            FullWellElectrons = settings.Camera.FullWellElectrons,
        },
        PhaseDrift = [new RandomWalkDrift(settings.DriftRadPerSqrtSecond)],
        DecorrelationTimeS = settings.DecorrelationTimeS,
    };

    private static ImmutableArray<float> Dark(RecordedFrames frames, Schedule schedule)
    {
        ImmutableArray<int> dark = schedule.FramesWith(FrameRole.Dark);
        return [.. Enumerable.Range(0, frames.FrameSize.PixelCount).Select(p => (float)dark.Average(f => (double)frames.Frame(f)[p]))];
    }

    private static double RowFidelity(ReadOnlySpan<Complex64> a, ReadOnlySpan<Complex64> b)
    {
        double re = 0, im = 0, aa = 0, bb = 0;
        for (int n = 0; n < a.Length; n++)
        {
            re += (a[n].r * (double)b[n].r) + (a[n].i * (double)b[n].i);
            im += (a[n].r * (double)b[n].i) - (a[n].i * (double)b[n].r);
            aa += a[n].SquaredMagnitude;
            bb += b[n].SquaredMagnitude;
        }

        return ((re * re) + (im * im)) / (aa * bb);
    }
}
