using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

/// <summary>Monte-Carlo bounds are four standard errors; the seeds are fixed.</summary>
public sealed class RandomStreamsTests
{
    private const int Count = 200_000;

    private static readonly RandomStreams Streams = new(20260401);

    [Fact]
    public void Normal_numbers_have_the_moments_of_the_normal_distribution()
    {
        double[] z = [.. Enumerable.Range(0, Count).Select(i => Streams.Normal(RandomPurpose.Medium, 3, i))];
        // Variances of the sample means of z, z², z³, z⁴: 1, 2, 15, 96 over n (moments of the normal distribution).
        AssertMean(z.Average(), 0, 1);
        AssertMean(z.Average(x => x * x), 1, 2);
        AssertMean(z.Average(x => x * x * x), 0, 15);
        AssertMean(z.Average(x => x * x * x * x), 3, 96);
    }

    [Fact]
    public void Complex_normal_numbers_are_circular_with_unit_mean_square()
    {
        (double Re, double Im)[] z = [.. Enumerable.Range(0, Count).Select(i => Streams.ComplexNormal(RandomPurpose.Medium, 4, i))];
        AssertMean(z.Average(v => (v.Re * v.Re) + (v.Im * v.Im)), 1, 1);
        AssertMean(z.Average(v => (v.Re * v.Re) - (v.Im * v.Im)), 0, 1);
        AssertMean(z.Average(v => 2 * v.Re * v.Im), 0, 1);
    }

    [Fact]
    public void Addresses_that_differ_in_one_part_are_independent()
    {
        AssertMean(Correlation(i => Streams.Normal(RandomPurpose.Medium, 5, i), i => Streams.Normal(RandomPurpose.Medium, 6, i)), 0, 1);
        AssertMean(Correlation(i => Streams.Normal(RandomPurpose.Medium, 5, i), i => Streams.Normal(RandomPurpose.Medium, 5, i + 1)), 0, 1);
        AssertMean(Correlation(i => Streams.Normal(RandomPurpose.Medium, 5, i), i => Streams.Normal(RandomPurpose.Medium, 5, i, 1)), 0, 1);
        AssertMean(Correlation(i => Streams.Normal(RandomPurpose.Medium, 5, i), i => Streams.Normal(RandomPurpose.Reference, 5, i)), 0, 1);
    }

    [Theory]
    [InlineData(0.3)]
    [InlineData(4.0)]
    [InlineData(60.0)]
    public void Poisson_numbers_have_the_mean_the_variance_and_the_zeros_of_the_distribution(double mean)
    {
        double[] k = [.. Enumerable.Range(0, Count).Select(
            i => (double)PoissonSampler.Sample(mean, Streams.Uniform(RandomPurpose.CameraNoise, 7, i)))];
        // Var(k) = λ; Var of (k − λ)² = λ(1 + 2λ); share of zeros e^{−λ}: textbook moments of the Poisson distribution.
        AssertMean(k.Average(), mean, mean);
        AssertMean(k.Average(x => (x - mean) * (x - mean)), mean, mean * (1 + (2 * mean)));
        double zero = Math.Exp(-mean);
        AssertMean(k.Count(x => x == 0) / (double)Count, zero, zero * (1 - zero), slack: 1.0 / Count);
    }

    [Fact]
    public void A_mean_of_zero_gives_no_photons() => Assert.Equal(0, PoissonSampler.Sample(0, 0.999999));

    private static double Correlation(Func<int, double> a, Func<int, double> b) =>
        Enumerable.Range(0, Count).Average(i => a(i) * b(i));

    private static void AssertMean(double found, double expected, double variance, double slack = 0) =>
        Assert.InRange(found, expected - (4 * Math.Sqrt(variance / Count)) - slack, expected + (4 * Math.Sqrt(variance / Count)) + slack);
}
