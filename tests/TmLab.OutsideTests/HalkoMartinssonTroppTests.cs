using TmLab.Numerics.LinearAlgebra;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Halko, Martinsson and Tropp, SIAM Rev. 53, 217 (2011), theorem 10.5: a random range of k + p columns leaves on average at most
/// √(1 + k/(p − 1)) √(Σ_{j&gt;k} σ_j²) of the matrix in the Frobenius norm. More passes can only leave less, and no range of that
/// dimension leaves less than √(Σ_{j&gt;k+p} σ_j²) (Eckart and Young, Psychometrika 1, 211 (1936)).
/// </summary>
public sealed class HalkoMartinssonTroppTests
{
    [Theory]
    [InlineData(0.02)]
    [InlineData(0.1)]
    public void A_randomised_search_leaves_no_more_than_the_bound(double decay)
    {
        const int k = 10, p = 8, size = 100, seeds = 10;
        double[] values = [.. Enumerable.Range(0, size).Select(j => Math.Exp(-decay * j))];
        double left = Enumerable.Range(0, seeds).Average(seed => Left(values, k + p, (ulong)seed));
        double bound = Math.Sqrt(1 + (k / (p - 1.0))) * Math.Sqrt(values.Skip(k).Sum(s => s * s));
        double best = Math.Sqrt(values.Skip(k + p).Sum(s => s * s));

        // 1e-6 of the energy is rounding of single-precision products.
        Assert.InRange(left, best - 1e-3, bound);
    }

    private static double Left(double[] values, int columns, ulong seed)
    {
        var options = new SpectrumOptions { PreferGramWhenCheaper = false, MaximumPasses = 2, Oversampling = 2, Seed = seed };
        using SingularVectors found = TallSpectrum.Leading(
            KnownSpectrum.Matrix(150, values, 61),
            columns,
            LinearAlgebraEngines.Choose(EngineChoice.Auto).Engine!,
            options,
            null,
            TestContext.Current.CancellationToken);

        // ‖A − A V V†‖² = ‖A‖² − ‖A V‖².
        return Math.Sqrt(Math.Max(0, values.Sum(s => s * s) - found.Spectrum.SingularValues.Sum(s => s * s)));
    }
}
