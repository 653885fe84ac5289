using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Statistics;
using TmLab.Theory;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Marchenko and Pastur, Math. USSR-Sb. 1, 457 (1967): edges and density. Quantiles and ⟨√x⟩: computed from the density with
/// SciPy quadrature, outside this program. Moments: Narayana polynomials; Bai and Silverstein, Spectral Analysis of Large
/// Dimensional Random Matrices (2010), lemma 3.1.
/// </summary>
public sealed class MarchenkoPasturTests
{
    private const double Tolerance = 1e-6;

    [Theory]
    [InlineData(1, 0, 4, 0.024725, 0.652776, 2.594571, 0.848826)]
    [InlineData(0.5, 0.085786, 2.914214, 0.208890, 0.830466, 2.092695, 0.932799)]
    [InlineData(0.25, 0.25, 2.25, 0.397881, 0.916004, 1.751423, 0.967688)]
    [InlineData(0.1, 0.467544, 1.732456, 0.597744, 0.966565, 1.461662, 0.987339)]
    [InlineData(0.05, 0.602786, 1.497214, 0.708474, 0.983308, 1.321180, 0.993710)]
    [InlineData(0.01, 0.81, 1.21, 0.865632, 0.996666, 1.140291, 0.998748)]
    public void Edges_and_quantiles_are_the_tabulated_ones(
        double ratio, double lower, double upper, double tenth, double median, double ninetieth, double meanRoot)
    {
        var law = new MarchenkoPastur(ratio);
        Assert.Equal(lower, law.LowerEdge, Tolerance);
        Assert.Equal(upper, law.UpperEdge, Tolerance);
        Assert.Equal(tenth, law.Quantile(0.1), Tolerance);
        Assert.Equal(median, law.Quantile(0.5), Tolerance);
        Assert.Equal(ninetieth, law.Quantile(0.9), Tolerance);
        Assert.Equal(meanRoot, law.MeanSingularValue(), Tolerance);
    }

    [Theory]
    [InlineData(0.75, 0.74295, 1e-5)]
    [InlineData(0.5, 0.830466, 1e-6)]
    public void Medians_are_those_that_Gavish_and_Donoho_use(double ratio, double median, double tolerance) =>
        Assert.Equal(median, new MarchenkoPastur(ratio).Quantile(0.5), tolerance);

    [Fact]
    public void A_square_matrix_has_the_quarter_circle_law()
    {
        var law = new MarchenkoPastur(1);
        Assert.Equal(2 / Math.PI, law.SingularValueDensity(0), 1e-15);
        Assert.Equal(Math.Sqrt(3) / Math.PI, law.SingularValueDensity(1), 1e-15);
        Assert.Equal(0, law.SingularValueDensity(2.0001));
        Assert.Equal(8 / (3 * Math.PI), law.MeanSingularValue(), 1e-12);
        Assert.Equal(0.807946, Math.Sqrt(law.Quantile(0.5)), Tolerance);
    }

    [Theory]
    [InlineData(0.3)]
    [InlineData(1)]
    [InlineData(2.5)]
    public void Moments_are_the_Narayana_polynomials(double g)
    {
        var law = new MarchenkoPastur(g);
        Assert.Equal(1, law.Moment(1), 1e-12);
        Assert.Equal(1 + g, law.Moment(2), 1e-12);
        Assert.Equal(1 + (3 * g) + (g * g), law.Moment(3), 1e-12);
        Assert.Equal(1 + (6 * g) + (6 * g * g) + (g * g * g), law.Moment(4), 1e-12);
    }

    /// <summary>E m₂ = 1 + γ and E m₃ = 1 + 3γ + γ² + 1/n² hold exactly at finite size for complex elements (Wick's theorem).</summary>
    [Fact]
    public void Spectra_of_random_matrices_have_the_exact_finite_size_moments()
    {
        const int m = 8, n = 16, draws = 1500;
        double[] second = new double[draws], third = new double[draws];
        for (int k = 0; k < draws; k++)
        {
            double[] x = [.. Spectrum(m, n, (ulong)k).Select(s => s * s / n)];
            second[k] = x.Average(v => v * v);
            third[k] = x.Average(v => v * v * v);
        }

        const double g = (double)m / n;
        AssertMean(1 + g, second);
        AssertMean(1 + (3 * g) + (g * g) + (1.0 / (n * n)), third);
    }

    /// <summary>Kolmogorov–Smirnov distances of 300 draws at 64 × 128, simulated with NumPy: mean 0.028, the largest 0.050.</summary>
    [Fact]
    public void Distances_of_random_matrices_to_the_law_are_the_simulated_ones()
    {
        const int draws = 60;
        SpectrumAgainstMarchenkoPastur[] found =
            [.. Enumerable.Range(0, draws).Select(k => SpectrumAgainstMarchenkoPastur.Compare(Spectrum(64, 128, (ulong)(k + 5000)), 64, 128))];
        double mean = found.Average(c => c.Distance), deviation = Math.Sqrt(found.Average(c => (c.Distance - mean) * (c.Distance - mean)));

        // 0.0005 is the rounding of the simulated figure; the program normalises by the sample's mean, the simulation by n, which
        // shifts x by sd(m₁) = 1/√(mn) = 0.011 times the density, at most 0.9: this much of the distance at the most.
        Assert.Equal(0.028, mean, 0.0005 + 0.010 + (4 * deviation / Math.Sqrt(draws)));
        Assert.All(found, c => Assert.True(c.IsCompatible, $"{c.Distance}"));
    }

    private static double[] Spectrum(int rows, int columns, ulong seed)
    {
        using ComplexMatrix gaussian = RandomMatrices.Gaussian(rows, columns, seed);
        using var wide = new Complex128Matrix(rows, columns);
        for (int row = 0; row < rows; row++)
        {
            for (int column = 0; column < columns; column++)
            {
                wide[row, column] = gaussian[row, column];
            }
        }

        return LinearAlgebraEngines.Choose(EngineChoice.Auto).Engine!.SingularValues(wide);
    }

    private static void AssertMean(double expected, double[] sample)
    {
        double mean = sample.Average(), error = Math.Sqrt(sample.Average(x => (x - mean) * (x - mean)) / sample.Length);
        Assert.Equal(expected, mean, 4 * error);
    }
}
