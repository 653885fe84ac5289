using System.Numerics;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;
using Xunit;

namespace TmLab.Numerics.Tests.Kernels;

public sealed class FringeStatisticsTests
{
    [Theory]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(7)]
    public void The_sums_are_those_of_the_fit_written_out_one_pixel_at_a_time(int steps)
    {
        const int fullScale = 4095, groups = 5;
        int pixels = 3 * ModePlanes.LaneMultiple;
        var random = new Random(steps);
        float[] dark = [.. Enumerable.Range(0, pixels).Select(_ => 20 * random.NextSingle())];
        var found = new FringeStatistics(dark, fullScale);
        var expected = new double[4, pixels];
        for (int g = 0; g < groups; g++)
        {
            FringeWeights weights = EqualSteps(steps);
            ushort[] counts = [.. Enumerable.Range(0, steps * pixels).Select(_ => (ushort)Math.Min(random.Next(5000), fullScale))];
            found.Add(counts, weights);
            for (int p = 0; p < pixels; p++)
            {
                AddByDefinition(expected, counts, weights, p, pixels, dark[p], fullScale);
            }
        }

        for (int p = 0; p < pixels; p++)
        {
            Assert.Equal(expected[0, p], found.Visibility[p], 1e-5 * Math.Max(1, expected[0, p]));
            // Counts of thousands in single precision: residuals are off by 10⁻³ of a count.
            Assert.Equal(expected[1, p], found.SquaredResidual[p], 1 + (1e-4 * expected[1, p]));
            Assert.Equal(expected[2, p], found.Level[p], 1e-5 * Math.Max(1, Math.Abs(expected[2, p])));
            Assert.Equal(expected[3, p], found.Saturated[p]);
        }
    }

    [Fact]
    public void A_scaled_subtraction_is_its_definition()
    {
        var random = new Random(3);
        float[] Draw() => [.. Enumerable.Range(0, 64).Select(_ => random.NextSingle())];
        float[] target = Draw(), values = Draw();
        float[] expected = [.. target.Zip(values, (y, x) => y - (x * 0.3f))];
        SubtractScaled.Run(target, values, 0.3f);
        Assert.Equal(expected, target);
    }

    private static FringeWeights EqualSteps(int steps)
    {
        double[] theta = [.. Enumerable.Range(0, steps).Select(s => 2 * Math.PI * s / steps)];
        return new FringeWeights(
            [.. theta.Select(_ => 1f / steps)],
            [.. theta.Select(t => (float)(Math.Cos(t) / steps))],
            [.. theta.Select(t => (float)(-Math.Sin(t) / steps))],
            [.. theta.Select(t => (float)Math.Cos(t))],
            [.. theta.Select(t => (float)Math.Sin(t))]);
    }

    private static void AddByDefinition(
        double[,] sums, ushort[] counts, FringeWeights weights, int pixel, int pixels, double dark, int fullScale)
    {
        double a = 0;
        Complex d = 0;
        for (int s = 0; s < weights.Background.Length; s++)
        {
            double count = counts[(s * pixels) + pixel];
            a += weights.Background[s] * count;
            d += new Complex(weights.FieldReal[s], weights.FieldImaginary[s]) * count;
            sums[3, pixel] += count >= fullScale ? 1 : 0;
        }

        sums[0, pixel] += a > dark ? 2 * d.Magnitude / (a - dark) : 0;
        sums[2, pixel] += a - dark;
        for (int s = 0; s < weights.Background.Length; s++)
        {
            double model = a + (2 * ((d.Real * weights.Cosine[s]) - (d.Imaginary * weights.Sine[s])));
            sums[1, pixel] += Math.Pow(counts[(s * pixels) + pixel] - model, 2);
        }
    }
}
