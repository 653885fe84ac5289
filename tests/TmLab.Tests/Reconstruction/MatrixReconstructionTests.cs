using System.Collections.Immutable;
using System.Numerics;
using CsCheck;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Reconstruction;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Reconstruction;

public sealed class MatrixReconstructionTests
{
    private static readonly ImageSize Size = new(7, 5);

    public static TheoryData<BasisKind, HadamardOrdering, int, SteppedArm> Cases => new()
    {
        { BasisKind.Hadamard, HadamardOrdering.Natural, 4, SteppedArm.Signal },
        { BasisKind.Hadamard, HadamardOrdering.Sequency, 3, SteppedArm.Reference },
        { BasisKind.HadamardBinary, HadamardOrdering.Natural, 5, SteppedArm.Signal },
        { BasisKind.Fourier, HadamardOrdering.Natural, 4, SteppedArm.Reference },
        { BasisKind.Pixel, HadamardOrdering.Natural, 6, SteppedArm.Signal },
    };

    [Theory]
    [MemberData(nameof(Cases))]
    public void A_measurement_without_noise_gives_the_matrix_back(BasisKind basis, HadamardOrdering ordering, int steps, SteppedArm arm)
    {
        var bench = new ExactBench(Modes(basis, ordering), Schedule.ModeMajor(16, steps), Size, 1, arm);
        (InMemoryMatrix matrix, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.True(bench.Fidelity(matrix, facts) > LeastFidelity(basis), $"fidelity {bench.Fidelity(matrix, facts)}");
        AssertEqualsTruthTimesReference(bench, matrix, Math.Sqrt(8000));
    }

    [Fact]
    public void Custom_patterns_give_the_matrix_back_by_least_squares()
    {
        var random = new Random(3);
        ImmutableArray<Complex> patterns =
            [.. Enumerable.Range(0, 24 * 16).Select(_ => Complex.FromPolarCoordinates(1, 2 * Math.PI * random.NextDouble()))];
        var modes = new ModeDescription(BasisKind.Custom, HadamardOrdering.Natural, 24, new GridShape(4, 4), "b.npy", null);
        var bench = new ExactBench(modes, Schedule.ModeMajor(24, 4), Size, 2, customPatterns: patterns);
        (InMemoryMatrix matrix, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.True(bench.Fidelity(matrix, facts) > 0.9999);
    }

    [Fact]
    public void Custom_patterns_that_do_not_span_the_modes_are_warned_of()
    {
        ImmutableArray<Complex> patterns = [.. Enumerable.Range(0, 16 * 16).Select(i => new Complex(i / 16 % 8 == i % 8 ? 1 : 0, 0))];
        var modes = new ModeDescription(BasisKind.Custom, HadamardOrdering.Natural, 16, new GridShape(4, 4), "b.npy", null);
        var bench = new ExactBench(modes, Schedule.ModeMajor(16, 4), Size, 2, customPatterns: patterns);
        (_, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.Contains(facts.Quality.Warnings, w => w.Contains("nearly dependent", StringComparison.Ordinal));
    }

    [Fact]
    public void Drift_that_the_trackers_show_is_removed_and_its_path_reported()
    {
        static double Drift(ScheduledFrame f) => 0.02 * f.TimeS;
        var bench = new ExactBench(Modes(BasisKind.Hadamard), TrackedSchedule.Make(16, 4, every: 4), Size, 4, driftRad: Drift);
        (InMemoryMatrix matrix, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings { Drift = DriftMethod.TrackersInterpolated });
        (InMemoryMatrix drifting, TransmissionMatrixFacts without) = Reconstruct(bench, new ReconstructionSettings { Drift = DriftMethod.None });
        Assert.True(bench.Fidelity(matrix, facts) > 0.999);
        Assert.True(bench.Fidelity(drifting, without) < 0.9);
        Assert.Equal(DriftMethod.TrackersInterpolated, facts.Drift.Method);
        // 16 frames of modes and 4 of the tracker stand between one tracker and the next. A linear drift inside a tracker biases
        // its phase by a term in e^{−2iφ} of relative size 0.02/2 that averages out over the pixels.
        Assert.All(Enumerable.Range(0, 5), k => Assert.Equal(0.02 * 20 * k, facts.Drift.TrackerPhaseRad[k], 0.01));
        Assert.Empty(facts.Quality.Warnings);
    }

    [Fact]
    public void A_tracker_gap_beyond_a_quarter_turn_is_warned_of_with_the_trackers_named()
    {
        var bench = new ExactBench(Modes(BasisKind.Hadamard), TrackedSchedule.Make(16, 4, every: 4), Size, 5, driftRad: f => f.Index >= 50 ? 2 : 0);
        (_, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.Contains(facts.Quality.Warnings, w => w.Contains("rad from the tracker at", StringComparison.Ordinal));
    }

    [Fact]
    public void Missing_trackers_are_warned_of()
    {
        var bench = new ExactBench(Modes(BasisKind.Hadamard), Schedule.ModeMajor(16, 4), Size, 6);
        (_, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.Contains(facts.Quality.Warnings, w => w.StartsWith("There are no trackers", StringComparison.Ordinal));
    }

    [Fact]
    public void Reference_frames_take_the_reference_out_of_the_rows()
    {
        ImmutableArray<ScheduledFrame> modes = Schedule.ModeMajor(16, 4).Frames;
        var reference = new ScheduledFrame(64, FrameRole.Reference, -1, -1, double.NaN, 64);
        var bench = new ExactBench(
            Modes(BasisKind.Hadamard), new Schedule([.. modes, reference], false), Size, 7, referenceCounts: p => 8000 + (200 * p));
        (InMemoryMatrix matrix, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.True(facts.Quality.RowsNormalised);
        AssertEqualsTruthTimesReference(bench, matrix, 1);
    }

    [Fact]
    public void Neither_tile_size_nor_lanes_nor_threads_change_a_bit() =>
        Gen.Select(Gen.Int[1, 40], Gen.Int[1, 4], Gen.Int[1, 3]).Sample((tilePixels, lanes, threads) =>
        {
            ExactBench bench = SharedBench.Value;
            InMemoryMatrix expected = Reconstruct(bench, new ReconstructionSettings { Threads = 1 }).Matrix;
            var settings = new ReconstructionSettings
            {
                Threads = threads,
                Lanes = 16 * lanes,
                MemoryBytes = (long)threads * tilePixels * ((2 * bench.Frames.Length) + (8 * 16)),
            };
            InMemoryMatrix found = Reconstruct(bench, settings).Matrix;
            Assert.All(Enumerable.Range(0, Size.PixelCount), p => Assert.True(expected.Row(p).SequenceEqual(found.Row(p))));
        }, iter: 40, threads: 1);

    [Fact]
    public void Saturated_and_dark_pixels_are_marked_invalid()
    {
        var bench = new ExactBench(Modes(BasisKind.Hadamard), Schedule.ModeMajor(16, 4), Size, 8);
        foreach (ushort[] frame in bench.Frames)
        {
            frame[3] = 65535;
            frame[11] = 0;
        }

        (_, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        Assert.Equal([3, 11], Enumerable.Range(0, Size.PixelCount).Where(p => !facts.Pixels.Valid[p]));
        Assert.Equal(Size.PixelCount - 2, facts.Quality.ValidPixels);
    }

    [Fact]
    public void The_noise_measured_from_the_residuals_is_the_noise_put_in()
    {
        const double sigma = 40;
        var bench = new ExactBench(Modes(BasisKind.Hadamard), Schedule.ModeMajor(16, 5), new ImageSize(32, 32), 9);
        var random = new Random(10);
        foreach (ushort[] frame in bench.Frames)
        {
            for (int p = 0; p < frame.Length; p++)
            {
                double normal = Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
                frame[p] = (ushort)Math.Clamp(Math.Round(frame[p] + (sigma * normal)), 0, 65535);
            }
        }

        (InMemoryMatrix matrix, TransmissionMatrixFacts facts) = Reconstruct(bench, new ReconstructionSettings());
        // var T = σ²/(S N) for S equal steps and N Hadamard patterns; 1024 pixels × 16 modes × 2 degrees of freedom.
        double expected = sigma * sigma / (5 * 16);
        double found = facts.Pixels.NoiseRms.Average(r => (double)r * r);
        Assert.Equal(expected, found, expected * 4 * Math.Sqrt(2.0 / (1024 * 16 * 2)));
        // And it is what the matrix really has.
        double error = 0;
        for (int p = 0; p < 1024; p++)
        {
            for (int n = 0; n < 16; n++)
            {
                Complex wrong = matrix.Row(p)[n].ToComplex() - (bench.Matrix[p, n] * Math.Sqrt(8000));
                error += (wrong.Real * wrong.Real) + (wrong.Imaginary * wrong.Imaginary);
            }
        }

        Assert.Equal(expected, error / (1024 * 16), expected * 4 / Math.Sqrt(1024 * 16));
    }

    [Fact]
    public void With_three_steps_the_noise_is_the_camera_models_or_unknown()
    {
        var bench = new ExactBench(Modes(BasisKind.Hadamard), Schedule.ModeMajor(16, 3), Size, 11);
        (_, TransmissionMatrixFacts unknown) = Reconstruct(bench, new ReconstructionSettings());
        Assert.All(unknown.Pixels.NoiseRms, r => Assert.True(float.IsNaN(r)));
        Assert.Contains(unknown.Quality.Warnings, w => w.Contains("three steps", StringComparison.Ordinal));
        MeasurementFacts known = bench.FactsWith(new CameraDescription(Size, 16, null, 2, 3));
        (_, TransmissionMatrixFacts modelled) = Reconstruct(bench, known, new ReconstructionSettings());
        // |R|² + ⟨|E|²⟩ = 9,500 counts at 2 electrons a count: variance 4,750 counts² + rounding and read noise; / (S N). The mean of
        // |E|² over 35 pixels scatters by 1500/√35, i.e. 2.7 % of the whole.
        Assert.Equal(4750.0 / 48, modelled.Pixels.NoiseRms.Average(r => (double)r * r), 4750.0 / 48 * 4 * 0.027);
    }

    [Fact]
    public void A_cancelled_reconstruction_stops()
    {
        ExactBench bench = SharedBench.Value;
        Assert.Throws<OperationCanceledException>(() => MatrixReconstruction.Run(
            bench.Reader, bench.Facts, new ReconstructionSettings(), new InMemoryMatrix(35, 16), null, new CancellationToken(true)));
    }

    private static readonly Lazy<ExactBench> SharedBench =
        new(() => new ExactBench(Modes(BasisKind.Hadamard), TrackedSchedule.Make(16, 4, 5), Size, 12, driftRad: f => 0.01 * f.Index));

    private static ModeDescription Modes(BasisKind basis, HadamardOrdering ordering = HadamardOrdering.Natural) =>
        new(basis, ordering, 16, new GridShape(4, 4), null, null);

    // Rounding to whole counts (variance 1/12) on fields of some 10 √counts beside a reference of 110: relative error below 10⁻⁴;
    // one macro-pixel at a time sends 16 times less light.
    private static double LeastFidelity(BasisKind basis) => basis == BasisKind.Pixel ? 0.9999 : 0.99999;

    private static void AssertEqualsTruthTimesReference(ExactBench bench, InMemoryMatrix matrix, double factor)
    {
        for (int p = 0; p < matrix.RowCount; p++)
        {
            for (int n = 0; n < matrix.ColumnCount; n++)
            {
                Assert.True((matrix.Row(p)[n].ToComplex() - (factor * bench.Matrix[p, n])).Magnitude < factor * 0.05);
            }
        }
    }

    private static (InMemoryMatrix Matrix, TransmissionMatrixFacts Facts) Reconstruct(ExactBench bench, ReconstructionSettings settings) =>
        Reconstruct(bench, bench.Facts, settings);

    private static (InMemoryMatrix Matrix, TransmissionMatrixFacts Facts) Reconstruct(
        ExactBench bench, MeasurementFacts measurement, ReconstructionSettings settings)
    {
        var matrix = new InMemoryMatrix(measurement.PixelCount, measurement.Manifest.Modes.ModeCount);
        TransmissionMatrixFacts facts = MatrixReconstruction.Run(bench.Reader, measurement, settings, matrix, null, TestContext.Current.CancellationToken);
        return (matrix, facts);
    }
}
