using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Shaping;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Tests.Shaping;

public sealed class FocusMaskTests
{
    private static readonly ImageSize Camera = new(6, 4);
    private static readonly GridShape Grid = new(8, 8);

    [Fact]
    public void The_panel_image_holds_the_phases_cell_by_cell_and_nothing_outside_the_region()
    {
        InMemoryMatrix matrix = Gaussian(1);
        FocusMask mask = FocusMask.Make(matrix, Facts(), "t.h5", [new FocusTarget(new CameraPixel(2, 3))]);
        for (int y = 0; y < 100; y++)
        {
            for (int x = 0; x < 120; x++)
            {
                bool inside = x is >= 10 and < 90 && y is >= 4 and < 84;
                int n = inside ? ((y - 4) / 10 * 8) + ((x - 10) / 10) : -1;
                int expected = inside ? (int)Math.Round(Turn(-matrix.Row((3 * 6) + 2)[n].ToComplex().Phase) * 256) % 256 : 0;
                Assert.Equal(expected, mask.Image.Levels[(y * 120) + x]);
            }
        }
    }

    [Fact]
    public void A_flatness_image_is_added_modulo_256()
    {
        InMemoryMatrix matrix = Gaussian(1);
        ImmutableArray<byte> flatness = [.. Enumerable.Range(0, 120 * 100).Select(i => (byte)(i * 7))];
        ImmutableArray<FocusTarget> targets = [new FocusTarget(new CameraPixel(0, 0))];
        FocusMask plain = FocusMask.Make(matrix, Facts(), "t.h5", targets);
        FocusMask flat = FocusMask.Make(matrix, Facts() with { Flatness = flatness }, "t.h5", targets);
        Assert.Equal(plain.Image.Levels.Select((g, i) => (byte)(g + flatness[i])), flat.Image.Levels);
    }

    // 1 + (π/4)(N − 1) sinc²(1/L): Vellekoop & Mosk, Opt. Lett. 32, 2309 (2007) for the phase-only mean; the level factor from
    // uniform phase errors, checked against an independent Monte-Carlo in the reference list (L = 256: 201.28 at N = 256).
    [Fact]
    public void The_mean_enhancement_over_random_media_is_the_published_one()
    {
        const int draws = 400;
        double[] found = new double[draws];
        for (int i = 0; i < draws; i++)
        {
            FocusMask mask = FocusMask.Make(Gaussian(100 + i), Facts(), "t.h5", [new FocusTarget(new CameraPixel(1, 1))]);
            found[i] = mask.Targets[0].EnhancementOnMatrix;
        }

        double mean = found.Average();
        double error = Math.Sqrt(found.Sum(f => (f - mean) * (f - mean)) / (draws - 1) / draws);
        Assert.Equal(FocusEnhancement.PhaseLevels(64, 256), mean, 4 * error);
        Assert.Equal(1 + (Math.PI / 4 * 63), FocusEnhancement.PhaseOnly(64), 1e-12);
    }

    // (π/4) N / M + 1 each for M targets by summed conjugation: reference list, §6 (M = 2, N = 256: 101.5).
    [Fact]
    public void Two_targets_share_the_light_as_published()
    {
        const int draws = 400;
        ImmutableArray<FocusTarget> targets = [new FocusTarget(new CameraPixel(1, 1)), new FocusTarget(new CameraPixel(4, 2))];
        double[] found = [.. Enumerable.Range(0, draws).Select(
            i => FocusMask.Make(Gaussian(900 + i), Facts(), "t.h5", targets).Targets.Average(t => t.EnhancementOnMatrix))];
        double mean = found.Average();
        double error = Math.Sqrt(found.Sum(f => (f - mean) * (f - mean)) / (draws - 1) / draws);
        // The formula is the limit of many modes; at N = 64 terms of order 1 remain.
        Assert.Equal((Math.PI / 4 * 64 / 2) + 1, mean, (4 * error) + 0.5);
    }

    // Phase: 1 + (π/4)(N − 1)|γ|², |γ|² = SNR/(1 + SNR): reference list §6, Monte-Carlo checked there.
    [Fact]
    public void With_noise_in_the_matrix_the_prediction_is_what_the_true_medium_gives()
    {
        const int draws = 400;
        var predicted = new double[draws];
        var achieved = new double[draws];
        for (int i = 0; i < draws; i++)
        {
            InMemoryMatrix truth = Gaussian(5000 + i), noise = Gaussian(9000 + i), measured = new(Camera.PixelCount, 64);
            for (int n = 0; n < 64; n++)
            {
                measured.Row(0)[n] = Complex64.FromComplex(truth.Row(0)[n].ToComplex() + (0.5 * noise.Row(0)[n].ToComplex()));
            }

            FocusMask mask = FocusMask.Make(measured, Facts(0.5f), "t.h5", [new FocusTarget(new CameraPixel(0, 0))]);
            predicted[i] = mask.Targets[0].PredictedEnhancement;
            achieved[i] = Intensity(truth.Row(0), mask.PhaseRad);
        }

        double difference = predicted.Average() - achieved.Average();
        double[] d = [.. predicted.Zip(achieved, (a, b) => a - b - difference)];
        Assert.InRange(Math.Abs(difference), 0, 4 * Math.Sqrt(d.Sum(x => x * x) / draws / draws));
    }

    [Fact]
    public void Only_the_targets_rows_are_read()
    {
        InMemoryMatrix matrix = Gaussian(1);
        FocusMask.Make(matrix, Facts(), "t.h5", [new FocusTarget(new CameraPixel(0, 0)), new FocusTarget(new CameraPixel(5, 3))]);
        Assert.Equal(2, matrix.RowsRead);
    }

    [Fact]
    public void A_target_outside_the_region_is_refused_with_the_valid_range()
    {
        BadInputException failure = Refused(new CameraPixel(6, 0), Facts());
        Assert.Contains("x in 0 … 5 and y in 0 … 3", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void An_invalid_target_is_refused_with_the_nearest_valid_pixel()
    {
        TransmissionMatrixFacts facts = Facts();
        PixelFacts pixels = facts.Pixels with { Valid = [.. facts.Pixels.Valid.Select((_, p) => p is not 0 and not 1)] };
        Assert.Contains("nearest valid pixel is 0,1", Refused(new CameraPixel(0, 0), facts with { Pixels = pixels }).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_matrix_without_a_modulator_or_with_an_amplitude_modulator_makes_no_phase_mask()
    {
        TransmissionMatrixFacts facts = Facts();
        Assert.Contains("modulator", Refused(default, facts with { Modulator = null }).Message, StringComparison.Ordinal);
        ModulatorDescription amplitude = facts.Modulator! with { Kind = ModulatorKind.Amplitude };
        Assert.Contains("amplitude", Refused(default, facts with { Modulator = amplitude }).Message, StringComparison.Ordinal);
    }

    private static BadInputException Refused(CameraPixel pixel, TransmissionMatrixFacts facts) =>
        Assert.Throws<BadInputException>(() => FocusMask.Make(Gaussian(1), facts, "t.h5", [new FocusTarget(pixel)]));

    private static double Turn(double phase)
    {
        double turns = phase / (2 * Math.PI);
        return turns - Math.Floor(turns);
    }

    private static double Intensity(ReadOnlySpan<Complex64> row, ImmutableArray<double> phases)
    {
        Complex sum = 0;
        double energy = 0;
        for (int n = 0; n < row.Length; n++)
        {
            sum += row[n].ToComplex() * Complex.FromPolarCoordinates(1, phases[n]);
            energy += row[n].SquaredMagnitude;
        }

        return sum.Magnitude * sum.Magnitude / energy;
    }

    private static InMemoryMatrix Gaussian(int seed)
    {
        var random = new Random(seed);
        var matrix = new InMemoryMatrix(Camera.PixelCount, Grid.Count);
        for (int p = 0; p < matrix.RowCount; p++)
        {
            for (int n = 0; n < matrix.ColumnCount; n++)
            {
                matrix.Row(p)[n] = Complex64.FromComplex(Complex.FromPolarCoordinates(
                    Math.Sqrt(-Math.Log(1 - random.NextDouble())), 2 * Math.PI * random.NextDouble()));
            }
        }

        return matrix;
    }

    private static TransmissionMatrixFacts Facts(float noiseRms = 0) => new(
        null,
        633,
        Camera,
        Grid,
        new ModulatorDescription(ModulatorKind.Phase, new ImageSize(120, 100), new PixelRectangle(10, 4, 80, 80), null, null, null),
        null,
        [],
        new PixelFacts(
            [.. Enumerable.Range(0, 24).Select(p => p / 6)],
            [.. Enumerable.Range(0, 24).Select(p => p % 6)],
            [.. Enumerable.Repeat(true, 24)],
            [.. new float[24]],
            [.. Enumerable.Repeat(noiseRms, 24)]),
        new ModeFacts([.. Enumerable.Repeat(true, 64)], [.. new float[64]]),
        DriftFacts.None(0),
        new MatrixQuality(0.5, 100, 24, 64, false, []));
}
