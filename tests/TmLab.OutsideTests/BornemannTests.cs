using TmLab.Theory;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Bornemann, Markov Process. Relat. Fields 16, 803 (2010), arXiv:0904.1581: moments of the Tracy–Widom law for β = 2. Values and
/// quantiles of F₂: Fredholm determinant with SciPy's Airy functions, outside this program.
/// </summary>
public sealed class BornemannTests
{
    [Theory]
    [InlineData(-3, 0.0803195529)]
    [InlineData(-2, 0.4132241425)]
    [InlineData(-1, 0.8072142420)]
    [InlineData(0, 0.9693728284)]
    [InlineData(1, 0.9975054381)]
    public void The_distribution_has_the_tabulated_values(double s, double expected) =>
        Assert.Equal(expected, TracyWidom.Cumulative(s), 2e-10);

    [Theory]
    [InlineData(0.01, -3.72445)]
    [InlineData(0.05, -3.19417)]
    [InlineData(0.5, -1.80491)]
    [InlineData(0.9, -0.59685)]
    [InlineData(0.95, -0.23247)]
    [InlineData(0.99, 0.47764)]
    public void Quantiles_are_the_tabulated_ones(double probability, double expected) =>
        Assert.Equal(expected, TracyWidom.Quantile(probability), 1e-5);

    [Fact]
    public void Mean_and_variance_follow_from_the_distribution()
    {
        // ∫ s dF and ∫ s² dF by parts over [−8, 6], trapezium rule; F's tails beyond are below 1e-12.
        const int steps = 280;
        const double low = -8, high = 6, step = (high - low) / steps;
        double first = high, second = high * high;
        for (int k = 1; k < steps; k++)
        {
            double s = low + (k * step), f = TracyWidom.Cumulative(s);
            first -= f * step;
            second -= 2 * s * f * step;
        }

        first -= step / 2;
        second -= high * step;
        Assert.Equal(TracyWidom.Mean, first, 1e-8);
        Assert.Equal(TracyWidom.Variance, second - (first * first), 1e-6);
    }

    [Fact]
    public void The_ends_are_0_and_1()
    {
        Assert.Equal(0, TracyWidom.Cumulative(double.NegativeInfinity));
        Assert.Equal(1, TracyWidom.Cumulative(double.PositiveInfinity));
        Assert.Throws<ArgumentOutOfRangeException>(() => TracyWidom.Cumulative(double.NaN));
    }
}
