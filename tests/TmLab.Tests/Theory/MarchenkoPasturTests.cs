using CsCheck;
using TmLab.Theory;
using Xunit;

namespace TmLab.Tests.Theory;

public sealed class MarchenkoPasturTests
{
    private static readonly Gen<double> s_ratios = Gen.Double[0.001, 8];

    [Fact]
    public void The_density_is_the_slope_of_the_distribution() => Gen.Select(s_ratios, Gen.Double[0.02, 0.98]).Sample((ratio, place) =>
    {
        var law = new MarchenkoPastur(ratio);
        double x = law.LowerEdge + (place * (law.UpperEdge - law.LowerEdge)), step = 1e-5 * Math.Min(x, law.UpperEdge - law.LowerEdge);
        double slope = (law.Cumulative(x + step) - law.Cumulative(x - step)) / (2 * step);

        // Central differences err by step² f″ and by rounding of F over the step.
        Assert.Equal(law.Density(x), slope, (1e-4 * law.Density(x)) + (1e-14 / step));
    });

    [Fact]
    public void Quantiles_invert_the_distribution() => Gen.Select(s_ratios, Gen.Double[1e-9, 1]).Sample((ratio, probability) =>
    {
        var law = new MarchenkoPastur(ratio);
        double x = law.Quantile(probability);
        if (probability <= law.AtomAtZero)
        {
            Assert.Equal(0, x);
            return;
        }

        // The error allowed in x is 1e-10; times the density.
        Assert.Equal(probability, law.Cumulative(x), 1e-13 + (1e-10 * Math.Max(1, law.Density(x))));
    });

    [Theory]
    [InlineData(0.02)]
    [InlineData(0.4)]
    [InlineData(0.999999)]
    [InlineData(1)]
    [InlineData(1.000001)]
    [InlineData(5)]
    public void Edges_quantiles_and_the_distribution_agree_at_the_ends(double ratio)
    {
        var law = new MarchenkoPastur(ratio);
        Assert.Equal(law.AtomAtZero > 0 ? 0 : law.LowerEdge, law.Quantile(0), 1e-10);
        Assert.Equal(law.UpperEdge, law.Quantile(1), 1e-10);
        Assert.Equal(0, law.Cumulative(-1e-9));
        Assert.Equal(1, law.Cumulative(law.UpperEdge));
        Assert.Equal(law.AtomAtZero, law.Cumulative(law.LowerEdge / 2), 1e-15);
        Assert.Equal(0, law.Density(law.LowerEdge));
        Assert.Equal(0, law.Density(law.UpperEdge + 1e-9));
    }

    [Fact]
    public void Moments_are_the_integrals_of_the_density() => s_ratios.Sample(ratio =>
    {
        var law = new MarchenkoPastur(ratio);
        for (int order = 1; order <= 4; order++)
        {
            Assert.Equal(law.Moment(order), Integral(law, x => Math.Pow(x, order)), 1e-6 * law.Moment(order));
        }

        Assert.Equal(Integral(law, Math.Sqrt), law.MeanSingularValue(), 1e-4);
    });

    [Theory]
    [InlineData(0)]
    [InlineData(-1)]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void Ratios_out_of_range_are_refused(double ratio) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => new MarchenkoPastur(ratio));

    [Fact]
    public void A_spectrum_at_the_quantiles_of_the_law_has_the_least_distance()
    {
        const int count = 200;
        var law = MarchenkoPastur.ForMatrix(1000, count);
        double[] values = [.. Enumerable.Range(0, count).Select(k => 7 * Math.Sqrt(law.Quantile((k + 0.5) / count)))];
        var found = SpectrumAgainstMarchenkoPastur.Compare(values, 1000, count);

        // Half a step, and a little for the normalisation by the mean of the sample.
        Assert.InRange(found.Distance, 0.5 / count, 0.6 / count);
        Assert.True(found.IsCompatible);
        Assert.Equal(7, found.Probability.Length);
        for (int k = 0; k < 7; k++)
        {
            Assert.Equal(found.PredictedQuantile[k], found.MeasuredQuantile[k], 0.01);
        }
    }

    [Fact]
    public void Another_spectrum_is_far_from_the_law()
    {
        double[] values = [.. Enumerable.Range(0, 200).Select(k => Math.Exp(-0.02 * k))];
        var found = SpectrumAgainstMarchenkoPastur.Compare(values, 200, 1000);
        Assert.False(found.IsCompatible);
        Assert.True(found.Distance > 0.1);
    }

    [Fact]
    public void Spectra_of_wrong_length_or_content_are_refused()
    {
        Assert.Throws<ArgumentException>(() => SpectrumAgainstMarchenkoPastur.Compare([1, 1], 3, 3));
        Assert.Throws<ArgumentException>(() => SpectrumAgainstMarchenkoPastur.Compare([0, 0], 2, 3));
        Assert.Throws<ArgumentException>(() => SpectrumAgainstMarchenkoPastur.Compare([1, double.NaN], 2, 3));
        Assert.Throws<ArgumentException>(() => SpectrumAgainstMarchenkoPastur.Compare([1, -1], 2, 3));
    }

    [Fact]
    public void Any_unit_gives_the_same_comparison()
    {
        double[] values = [3, 2, 1];
        double expected = SpectrumAgainstMarchenkoPastur.Compare(values, 3, 9).Distance;
        Assert.Equal(expected, SpectrumAgainstMarchenkoPastur.Compare([.. values.Select(v => v * 1e-200)], 3, 9).Distance, 1e-14);
        Assert.Equal(expected, SpectrumAgainstMarchenkoPastur.Compare([.. values.Select(v => v * 1e200)], 9, 3).Distance, 1e-14);
    }

    // ∫ g(x) f(x) dx with x = mid − half cos θ, in which the density's square roots are smooth.
    private static double Integral(MarchenkoPastur law, Func<double, double> function)
    {
        const int nodes = 20_000;
        double middle = (law.UpperEdge + law.LowerEdge) / 2, half = (law.UpperEdge - law.LowerEdge) / 2, sum = 0;
        for (int k = 1; k < nodes; k++)
        {
            double angle = Math.PI * k / nodes, x = middle - (half * Math.Cos(angle));
            sum += function(x) * law.Density(x) * half * Math.Sin(angle);
        }

        return sum * Math.PI / nodes;
    }
}
