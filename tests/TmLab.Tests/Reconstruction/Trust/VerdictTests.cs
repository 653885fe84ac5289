using System.Collections.Immutable;
using System.Globalization;
using System.Text;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Simulation;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Reconstruction.Trust;

/// <summary>The verdict beside the truth over simulated measurements that span what a bench may meet.</summary>
public sealed class VerdictTests
{
    private const string DocumentVariable = "TMLAB_WRITE_TRUST_TABLE";
    private const string Document = "notebooks-free-docs/trust.md";
    private const string TableStart = "<!-- table of trials: begin -->";
    private const string TableEnd = "<!-- table of trials: end -->";

    private sealed record Trial(
        BasisKind Basis, int Steps, double Electrons, double Drift, double Decorrelation, double Grain, int TrackerEvery = 8,
        double StepScale = 0, bool Speckle = false);

    /// <summary>64 modes, 24 × 24 pixels, 100 frames a second; drift in rad/√s, decorrelation time in seconds.</summary>
    private static readonly ImmutableArray<Trial> Trials =
    [
        new(BasisKind.Hadamard, 4, 1000, 0, 0, 0),
        new(BasisKind.Hadamard, 4, 100, 0, 0, 0),
        new(BasisKind.Hadamard, 4, 20, 0, 0, 0),
        new(BasisKind.Hadamard, 4, 5, 0, 0, 0),
        new(BasisKind.Hadamard, 4, 2, 0, 0, 0),
        new(BasisKind.Hadamard, 4, 1000, 0.3, 0, 0),
        new(BasisKind.Hadamard, 4, 1000, 1, 0, 0),
        new(BasisKind.Hadamard, 4, 1000, 1.5, 0, 0),
        new(BasisKind.Hadamard, 4, 100, 1, 0, 3),
        new(BasisKind.Hadamard, 4, 1000, 0.5, 30, 0),
        new(BasisKind.Hadamard, 4, 1000, 0.5, 10, 2),
        new(BasisKind.Hadamard, 4, 300, 0.5, 8, 0),
        new(BasisKind.Hadamard, 3, 1000, 0.5, 0, 0),
        new(BasisKind.Hadamard, 3, 100, 0.5, 0, 0),
        new(BasisKind.Hadamard, 3, 20, 0, 20, 2),
        new(BasisKind.Hadamard, 5, 300, 1, 0, 0),
        new(BasisKind.Hadamard, 6, 300, 0.5, 20, 2),
        new(BasisKind.Hadamard, 8, 30, 0.5, 0, 0),
        new(BasisKind.Hadamard, 8, 5, 0, 0, 2),
        new(BasisKind.Hadamard, 4, 1000, 0.5, 0, 0, 16, 0.05),
        new(BasisKind.Hadamard, 5, 300, 0.5, 0, 2, 16, -0.1),
        new(BasisKind.Hadamard, 4, 1000, 0.5, 0, 2, 8, 0, true),
        new(BasisKind.Hadamard, 4, 1000, 0.7, 0, 0, 32),
        new(BasisKind.HadamardBinary, 4, 1000, 0, 0, 0),
        new(BasisKind.HadamardBinary, 4, 100, 0, 0, 2),
        new(BasisKind.HadamardBinary, 4, 20, 0, 0, 0),
        new(BasisKind.HadamardBinary, 4, 1000, 0.5, 0, 0),
        new(BasisKind.HadamardBinary, 4, 1000, 1, 0, 2),
        new(BasisKind.HadamardBinary, 5, 1000, 0.3, 20, 0),
        new(BasisKind.HadamardBinary, 3, 300, 0.3, 0, 0),
        new(BasisKind.HadamardBinary, 8, 100, 0.5, 0, 0),
        new(BasisKind.HadamardBinary, 4, 300, 0.2, 10, 0),
        new(BasisKind.Fourier, 4, 1000, 0.5, 0, 0),
        new(BasisKind.Fourier, 4, 50, 0, 0, 2),
        new(BasisKind.Fourier, 4, 10, 0.3, 0, 0),
        new(BasisKind.Fourier, 3, 300, 1, 0, 0),
        new(BasisKind.Fourier, 5, 1000, 0.5, 10, 0),
        new(BasisKind.Fourier, 6, 1000, 2, 0, 2),
        new(BasisKind.Fourier, 8, 100, 0.5, 20, 0, 16, 0.05),
        new(BasisKind.Pixel, 4, 5000, 0, 0, 0),
        new(BasisKind.Pixel, 4, 1000, 0.3, 0, 0),
        new(BasisKind.Pixel, 4, 300, 0, 0, 2),
        new(BasisKind.Pixel, 5, 1000, 0.5, 20, 0),
        new(BasisKind.Pixel, 8, 1000, 0.5, 0, 0),
        new(BasisKind.Pixel, 3, 2000, 0.3, 0, 2),
        new(BasisKind.Pixel, 6, 500, 0.3, 0, 0),
    ];

    [Fact]
    public void The_predicted_fidelity_is_the_true_one()
    {
        (Trial Trial, TrialBench Bench)[] all = [.. Trials.Select((t, i) => (t, Run(t, (ulong)(100 + i))))];
        string table = Table(all);
        TestContext.Current.TestOutputHelper?.WriteLine(table);
        WriteDocument(table);
        double[] errors = [.. all.Select(a => Math.Abs(a.Bench.Facts.Quality.Budget.Fidelity - a.Bench.TrueFidelity))];
        Assert.True(all.Length >= 40);
        Assert.True(errors.Max() <= 0.03, table);
        Assert.True(errors.Count(e => e <= 0.01) >= 0.9 * errors.Length, table);
    }

    private static TrialBench Run(Trial trial, ulong seed)
    {
        var settings = new BenchSettings
        {
            Seed = seed,
            MeanSignalElectrons = trial.Electrons,
            Grain = trial.Grain > 0 ? new SpeckleGrain(trial.Grain) : SpeckleGrain.IndependentPixels,
            PhaseDrift = trial.Drift > 0 ? [new RandomWalkDrift(trial.Drift)] : [],
            DecorrelationTimeS = trial.Decorrelation > 0 ? trial.Decorrelation : double.PositiveInfinity,
            Steps = new StepError(trial.StepScale),
            Reference = new ReferenceBeam(trial.Speckle ? ReferenceShape.Speckle : ReferenceShape.Plane),
            Camera = new SimulatedCamera { ElectronsPerCount = 0.5 },
        };
        var plan = new ScheduleSettings { PatternCount = 64, Steps = trial.Steps, TrackerEveryModes = trial.TrackerEvery, DarkFrames = 0 };
        return TrialBench.Run(settings, StartingWithATracker(plan), TrialBench.Manifest(trial.Grain > 0 ? 32 : 24, 8, trial.Basis, settings.Camera));
    }

    /// <summary>
    /// The first tracker stands at time zero: the bench's sample moves on a straight way from its start to another one, so that e^{−t/τ}
    /// is the correlation with the start only. Dark and reference frames come last.
    /// </summary>
    private static Schedule StartingWithATracker(ScheduleSettings plan)
    {
        ImmutableArray<ScheduledFrame> frames =
            [.. ScheduleBuilder.Build(plan).Frames.Select(f => f.Index < plan.Steps ? f with { TimeS = f.Index * 1e-6 } : f)];
        int count = frames.Length;
        return new Schedule(
            [
                .. frames,
                .. Enumerable.Range(0, 12).Select(i => new ScheduledFrame(
                    count + i, i < 4 ? FrameRole.Dark : FrameRole.Reference, -1, -1, double.NaN, (count + i) / plan.FrameRateHz)),
            ],
            timesAreMeasured: true);
    }

    private static string Table((Trial Trial, TrialBench Bench)[] all)
    {
        var text = new StringBuilder();
        text.AppendLine("| basis | steps | signal e⁻ | drift rad/√s | decorrelation s | grain px | tracker every | predicted | true | difference | noise | drift left | decorrelation | steps left |");
        text.AppendLine("|---|---|---|---|---|---|---|---|---|---|---|---|---|---|");
        foreach ((Trial t, TrialBench b) in all)
        {
            ErrorBudget e = b.Facts.Quality.Budget;
            text.AppendLine(string.Create(
                CultureInfo.InvariantCulture,
                $"| {t.Basis} | {t.Steps} | {t.Electrons} | {t.Drift} | {(t.Decorrelation > 0 ? t.Decorrelation.ToString(CultureInfo.InvariantCulture) : "none")} | {t.Grain} | {t.TrackerEvery} | {e.Fidelity:F4} | {b.TrueFidelity:F4} | {Signed(e.Fidelity - b.TrueFidelity)} | {e.Noise:F4} | {e.Drift:F4} | {e.Decorrelation:F4} | {e.Steps:F4} |"));
        }

        return text.ToString();
    }

    private static string Signed(double value) => (value < -0.00005 ? "−" : "+") + Math.Abs(value).ToString("F4", CultureInfo.InvariantCulture);

    private static void WriteDocument(string table)
    {
        if (Environment.GetEnvironmentVariable(DocumentVariable) is not "1")
        {
            return;
        }

        string path = RepositoryFolder.Combine(Document);
        string page = File.ReadAllText(path);
        int from = page.IndexOf(TableStart, StringComparison.Ordinal) + TableStart.Length, to = page.IndexOf(TableEnd, StringComparison.Ordinal);
        File.WriteAllText(path, page[..from] + "\n" + table + page[to..]);
    }
}
