using TmLab.Numerics.Statistics;
using Xunit;

namespace TmLab.Numerics.Tests.Statistics;

public sealed class DistributionDistanceTests
{
    private static double Uniform(double x) => Math.Clamp(x, 0, 1);

    [Fact]
    public void The_distance_is_exact_at_both_sides_of_a_step()
    {
        // F_n is 0, then 1 from 0.3 on: the largest difference from x is 0.7, just at the step.
        Assert.Equal(0.7, DistributionDistance.KolmogorovSmirnov([0.3], Uniform), 1e-15);
        Assert.Equal(0.8, DistributionDistance.KolmogorovSmirnov([0.8], Uniform), 1e-15);

        // Two equal numbers make one step of height 1.
        Assert.Equal(0.5, DistributionDistance.KolmogorovSmirnov([0.5, 0.5], Uniform), 1e-15);

        // Mid-points of n cells are nearest: 1/(2n).
        Assert.Equal(0.05, DistributionDistance.KolmogorovSmirnov([.. Enumerable.Range(0, 10).Select(k => (k + 0.5) / 10)], Uniform), 1e-15);
    }

    [Fact]
    public void Order_does_not_matter_and_nothing_or_NaN_is_refused()
    {
        Assert.Equal(
            DistributionDistance.KolmogorovSmirnov([0.1, 0.5, 0.9], Uniform), DistributionDistance.KolmogorovSmirnov([0.9, 0.1, 0.5], Uniform));
        Assert.Throws<ArgumentException>(() => DistributionDistance.KolmogorovSmirnov([], Uniform));
        Assert.Throws<ArgumentException>(() => DistributionDistance.KolmogorovSmirnov([double.NaN], Uniform));
    }

    [Fact]
    public void Quantiles_interpolate_between_order_statistics()
    {
        Assert.Equal(1, DistributionDistance.Quantile([1, 2, 4], 0));
        Assert.Equal(3, DistributionDistance.Quantile([1, 2, 4], 0.75));
        Assert.Equal(4, DistributionDistance.Quantile([1, 2, 4], 1));
        Assert.Equal(5, DistributionDistance.Quantile([5], 0.3));
    }
}
