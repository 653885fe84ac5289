using MathNet.Numerics;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

/// <summary>Speckle on the virtual camera against Goodman, J. Opt. Soc. Am. 66, 1145 (1976). Bounds are four standard errors.</summary>
public sealed class SpeckleTests
{
    private const int Side = 128;

    [Fact]
    public void Fully_developed_speckle_has_the_published_contrasts()
    {
        double[] intensity = Blank(SpeckleGrain.IndependentPixels);
        double n = intensity.Length;
        double mean = intensity.Average();
        // sd of the contrast of n independent speckles ≈ 1/√n; of the mean 1/√n; of the median of an exponential 1/√n too.
        Assert.InRange(Contrast(intensity), 1 - (4 / Math.Sqrt(n)), 1 + (4 / Math.Sqrt(n)));
        Assert.InRange(mean / 1000, 1 - (4 / Math.Sqrt(n)), 1 + (4 / Math.Sqrt(n)));
        Assert.InRange(intensity.Order().ElementAt((int)n / 2) / mean, Math.Log(2) - (4 / Math.Sqrt(n)), Math.Log(2) + (4 / Math.Sqrt(n)));
        double[] amplitude = [.. intensity.Select(Math.Sqrt)];
        // Rayleigh: √(4/π − 1) = 0.522723; sd of a contrast is below 1/√n here.
        Assert.InRange(Contrast(amplitude), 0.522723 - (4 * 0.5 / Math.Sqrt(n)), 0.522723 + (4 * 0.5 / Math.Sqrt(n)));
    }

    [Theory]
    [InlineData(2)]
    [InlineData(5)]
    public void A_sum_of_independent_speckle_patterns_has_contrast_one_over_root_of_their_number(int patterns)
    {
        using VirtualBench bench = Bench(SpeckleGrain.IndependentPixels);
        double[] sum = new double[Side * Side];
        for (int p = 0; p < sum.Length; p++)
        {
            sum[p] = Enumerable.Range(0, patterns).Sum(n => (double)bench.Truth.Matrix[p, n].SquaredMagnitude);
        }

        Assert.InRange(Contrast(sum), (1 / Math.Sqrt(patterns)) - (4.0 / Side), (1 / Math.Sqrt(patterns)) + (4.0 / Side));
    }

    [Theory]
    [InlineData(4, PupilShape.Circular)]
    [InlineData(4, PupilShape.Square)]
    [InlineData(6, PupilShape.Circular)]
    public void The_grain_has_the_width_and_the_form_of_the_pupil_formula_and_obeys_Siegert(double width, PupilShape shape)
    {
        using VirtualBench bench = Bench(new SpeckleGrain(width, shape));
        double cyclesPerPixel = (shape == PupilShape.Circular ? 1.029 : 0.886) / width;
        double speckles = 64.0 * Side * Side * cyclesPerPixel * cyclesPerPixel * 0.785;
        double bound = 4 * 2 / Math.Sqrt(speckles);
        for (int lag = 1; lag <= (int)width; lag++)
        {
            (double g1Squared, double g2MinusOne) = Correlations(bench.Truth.Matrix, lag);
            double expected = shape == PupilShape.Circular ? Airy(Math.PI * cyclesPerPixel * lag) : SincSquared(cyclesPerPixel * lag);
            // The pupil has few points: its edge adds up to about one part in its radius.
            double edge = 0.5 / (Side * cyclesPerPixel / 2);
            Assert.InRange(g2MinusOne, expected - bound - edge, expected + bound + edge);
            Assert.InRange(g2MinusOne, g1Squared - bound, g1Squared + bound);
        }

        Assert.InRange(Correlations(bench.Truth.Matrix, (int)width / 2).G2MinusOne, 0.5 - bound - 0.03, 0.5 + bound + 0.03);
    }

    [Fact]
    public void A_speckle_reference_has_the_ratio_and_the_statistics_asked_for()
    {
        BenchSettings settings = new() { Reference = new ReferenceBeam(ReferenceShape.Speckle, 3), Camera = Benches.Ideal };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(Side, 2), Benches.Plain(FrameRole.Reference, 1));
        double[] intensity = [.. Benches.Light(bench, 0).Select(x => (double)x)];
        Assert.InRange(intensity.Average() / 3000, 1 - (4.0 / Side), 1 + (4.0 / Side));
        Assert.InRange(Contrast(intensity), 1 - (4.0 / Side), 1 + (4.0 / Side));
    }

    [Fact]
    public void A_grain_keeps_the_mean_intensity()
    {
        double[] intensity = Blank(new SpeckleGrain(3));
        double speckles = Side * Side * 0.343 * 0.343 * 0.785;
        Assert.InRange(intensity.Average() / 1000, 1 - (4 / Math.Sqrt(speckles)), 1 + (4 / Math.Sqrt(speckles)));
    }

    private static VirtualBench Bench(SpeckleGrain grain) => Benches.Create(
        new BenchSettings { Grain = grain, Camera = Benches.Ideal, Seed = 11 }, Benches.Manifest(Side, 8), Benches.Plain(FrameRole.Blank, 1));

    private static double[] Blank(SpeckleGrain grain)
    {
        using VirtualBench bench = Bench(grain);
        return [.. Benches.Light(bench, 0).Select(x => (double)x)];
    }

    private static double Contrast(double[] values)
    {
        double mean = values.Average();
        return Math.Sqrt(values.Average(v => (v - mean) * (v - mean))) / mean;
    }

    /// <summary>Over all columns and pixels: |⟨E*(x) E(x+lag)⟩|² and the intensity correlation minus one; the field is periodic.</summary>
    private static (double G1Squared, double G2MinusOne) Correlations(ComplexMatrix matrix, int lag)
    {
        double re = 0;
        double im = 0;
        double product = 0;
        double mean = 0;
        for (int p = 0; p < matrix.Rows; p++)
        {
            int q = (p / Side * Side) + ((p + lag) % Side);
            Span<Complex64> here = matrix.Row(p);
            Span<Complex64> there = matrix.Row(q);
            for (int n = 0; n < here.Length; n++)
            {
                Complex64 a = here[n];
                Complex64 b = there[n];
                re += (a.r * b.r) + (a.i * b.i);
                im += (a.r * b.i) - (a.i * b.r);
                product += (double)a.SquaredMagnitude * b.SquaredMagnitude;
                mean += a.SquaredMagnitude;
            }
        }

        double count = (double)matrix.Rows * matrix.Columns;
        return (((re * re) + (im * im)) / (mean * mean), (product * count / (mean * mean)) - 1);
    }

    private static double Airy(double x)
    {
        double amplitude = 2 * SpecialFunctions.BesselJ(1, x) / x;
        return amplitude * amplitude;
    }

    private static double SincSquared(double x)
    {
        double amplitude = Math.Sin(Math.PI * x) / (Math.PI * x);
        return amplitude * amplitude;
    }
}
