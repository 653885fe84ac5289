using System.Collections.Immutable;
using System.Numerics;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Reconstruction;
using TmLab.Simulation;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Reconstruction.Trust;

/// <summary>A measurement on the virtual bench, taken in as ingest would and reconstructed.</summary>
internal sealed class TrialBench
{
    private TrialBench(InMemoryMatrix matrix, TransmissionMatrixFacts facts, double fidelity, BenchTruth truth) =>
        (Matrix, Facts, TrueFidelity, Truth) = (matrix, facts, fidelity, truth);

    public InMemoryMatrix Matrix { get; }

    public TransmissionMatrixFacts Facts { get; }

    /// <summary>Mean over valid rows of |⟨a,b⟩|²/(⟨a,a⟩⟨b,b⟩), valid columns only, b the matrix at the start.</summary>
    public double TrueFidelity { get; }

    public BenchTruth Truth { get; }

    public static MeasurementManifest Manifest(int side, int gridSide, BasisKind basis, SimulatedCamera camera) => new(
        null,
        null,
        new CameraDescription(new ImageSize(side, side), 16, null, camera.ElectronsPerCount, camera.ReadNoiseElectrons),
        new FrameLocation(FrameStorageKind.Raw, ["frames.raw"], null, RawPixelFormat.UInt16LittleEndian, 0),
        new ScheduleLocation("schedule.csv", null, 0),
        new ModeDescription(basis, HadamardOrdering.Natural, gridSide * gridSide, new GridShape(gridSide, gridSide), null, null),
        null,
        SteppedArm.Signal,
        null,
        null);

    public static TrialBench Run(
        BenchSettings settings, ScheduleSettings plan, int side, int gridSide, BasisKind basis = BasisKind.Hadamard, ReconstructionSettings? how = null) =>
        Run(settings, ScheduleBuilder.Build(plan), Manifest(side, gridSide, basis, settings.Camera), how);

    public static TrialBench Run(BenchSettings settings, Schedule schedule, MeasurementManifest manifest, ReconstructionSettings? how = null)
    {
        CancellationToken cancel = TestContext.Current.CancellationToken;
        using VirtualBench bench = VirtualBench.Create(settings, manifest, schedule, threads: 1, cancellation: cancel);
        using RecordedFrames frames = bench.Record(1, cancellation: cancel);
        var facts = new MeasurementFacts(
            manifest, bench.FrameSize, schedule, [.. schedule.Frames.Select(_ => default(FrameFacts))], Dark(frames, schedule), [], null, []);
        var matrix = new InMemoryMatrix(facts.PixelCount, manifest.Modes.ModeCount);
        TransmissionMatrixFacts found = MatrixReconstruction.Run(
            frames, facts, (how ?? new ReconstructionSettings()) with { Threads = 1 }, matrix, null, cancel);
        return new TrialBench(matrix, found, Fidelity(matrix, found, bench.Truth.Matrix), bench.Truth);
    }

    private static ImmutableArray<float> Dark(RecordedFrames frames, Schedule schedule)
    {
        ImmutableArray<int> dark = schedule.FramesWith(FrameRole.Dark);
        return
        [
            .. Enumerable.Range(0, frames.FrameSize.PixelCount)
                .Select(p => dark.IsEmpty ? 0f : (float)dark.Average(f => (double)frames.Frame(f)[p])),
        ];
    }

    private static double Fidelity(InMemoryMatrix found, TransmissionMatrixFacts facts, ComplexMatrix truth)
    {
        int[] columns = [.. Enumerable.Range(0, found.ColumnCount).Where(n => facts.Modes.Valid[n])];
        return Enumerable.Range(0, found.RowCount).Where(p => facts.Pixels.Valid[p]).Average(p =>
        {
            Complex overlap = 0;
            double a = 0, b = 0;
            foreach (int n in columns)
            {
                Complex x = found.Row(p)[n].ToComplex(), y = truth.Row(p)[n].ToComplex();
                overlap += x * Complex.Conjugate(y);
                a += x.Magnitude * x.Magnitude;
                b += y.Magnitude * y.Magnitude;
            }

            return overlap.Magnitude * overlap.Magnitude / (a * b);
        });
    }
}
