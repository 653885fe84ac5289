using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Statistics;
using TmLab.Theory;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>Atas, Bogomolny, Giraud and Roux, Phys. Rev. Lett. 110, 084101 (2013), table I: mean ratios of consecutive spacings.</summary>
public sealed class AtasTests
{
    [Fact]
    public void Squared_singular_values_of_complex_matrices_repel_as_the_unitary_ensemble()
    {
        ILinearAlgebraEngine engine = LinearAlgebraEngines.Choose(EngineChoice.Auto).Engine!;
        const int draws = 40, m = 64;
        double[] means = [.. Enumerable.Range(0, draws).Select(k => SpacingRatios.Mean(Levels(engine, m, 128, (ulong)k)))];
        double mean = means.Average(), error = Math.Sqrt(means.Average(x => (x - mean) * (x - mean)) / draws);

        // 0.002: what the finite size adds at 64 × 128 (simulated with NumPy: 0.5997; 128 × 512: 0.6013).
        Assert.Equal(SpacingRatios.UnitaryMean, mean, 0.002 + (4 * error));
        Assert.True(mean - (4 * error) > SpacingRatios.OrthogonalMean);

        // One spectrum's scatter is 0.30/√n.
        int ratios = m - (2 * (int)(SpacingRatios.EdgePart * m)) - 2;
        Assert.Equal(SpacingRatios.ScaledDeviation, error * Math.Sqrt(draws * ratios), 4 * SpacingRatios.ScaledDeviation / Math.Sqrt(2 * draws));
    }

    [Fact]
    public void Independent_levels_do_not_repel()
    {
        var random = new SeededRandom(1);
        const int levels = 40_000;
        double mean = SpacingRatios.Mean([.. Enumerable.Range(0, levels).Select(_ => random.NextUniform())]);

        // A single ratio of independent spacings has E r̃² = 3 − 4 ln 2, sd 0.278; neighbours share a spacing, which the factor 4 covers.
        Assert.Equal(SpacingRatios.PoissonMean, (2 * Math.Log(2)) - 1, 1e-15);
        Assert.Equal(SpacingRatios.PoissonMean, mean, 4 * 0.278 / Math.Sqrt(levels * (1 - (2 * SpacingRatios.EdgePart))));
    }

    private static double[] Levels(ILinearAlgebraEngine engine, int rows, int columns, ulong seed)
    {
        using var matrix = new Complex128Matrix(rows, columns);
        for (int row = 0; row < rows; row++)
        {
            var random = new SeededRandom(seed + 900, (ulong)row);
            foreach (ref Complex element in matrix.Row(row))
            {
                element = random.NextComplexNormal();
            }
        }

        return [.. engine.SingularValues(matrix).Select(s => s * s)];
    }
}
