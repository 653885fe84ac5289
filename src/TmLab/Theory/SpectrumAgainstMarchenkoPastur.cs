using System.Collections.Immutable;
using TmLab.Numerics;
using TmLab.Numerics.Statistics;

namespace TmLab.Theory;

/// <summary>
/// A measured spectrum beside the Marchenko–Pastur law of its matrix' shape. Spectra are rigid: eigenvalues repel each other, so the
/// Kolmogorov–Smirnov distance of a matrix of independent elements is near <see cref="TypicalDistance"/>/m, not 1/√m, and the
/// test's p-value for independent samples must not be used. Immutable.
/// </summary>
/// <param name="Law">The law.</param>
/// <param name="Probability">The probabilities at which quantiles are compared.</param>
/// <param name="PredictedQuantile">The law's quantiles of x = s̃².</param>
/// <param name="MeasuredQuantile">The spectrum's.</param>
/// <param name="Distance">Kolmogorov–Smirnov distance of x to the law.</param>
/// <param name="ValueCount">m, the number of singular values.</param>
public sealed record SpectrumAgainstMarchenkoPastur(
    MarchenkoPastur Law,
    ImmutableArray<double> Probability,
    ImmutableArray<double> PredictedQuantile,
    ImmutableArray<double> MeasuredQuantile,
    double Distance,
    int ValueCount)
{
    /// <summary>m times the distance that an m × n matrix of independent elements typically has (0.028 · 64, 0.015 · 128 by simulation).</summary>
    public const double TypicalDistance = 3;

    /// <summary>m times the distance above which a spectrum is not that of independent elements (largest of 300 draws at 64 × 128: 3.2).</summary>
    public const double LargestDistance = 4;

    /// <summary>The probabilities at which <see cref="Compare"/> gives quantiles.</summary>
    public static ImmutableArray<double> ComparedProbabilities { get; } = [0.05, 0.10, 0.25, 0.50, 0.75, 0.90, 0.95];

    /// <summary>Whether the distance is within what independent elements give: at most <see cref="LargestDistance"/>/m.</summary>
    public bool IsCompatible => Distance * ValueCount <= LargestDistance;

    /// <summary>Compares a spectrum, normalised to ⟨s̃²⟩ = 1 (Popoff et al., Phys. Rev. Lett. 104, 100601 (2010)), with the law.</summary>
    /// <param name="singularValues">All min(P, N) singular values in any order and unit, not all zero.</param>
    /// <param name="rows">P.</param>
    /// <param name="columns">N.</param>
    /// <exception cref="ArgumentException">Their number is not min(P, N), or they are all zero or not finite or negative.</exception>
    public static SpectrumAgainstMarchenkoPastur Compare(IReadOnlyCollection<double> singularValues, int rows, int columns)
    {
        var law = MarchenkoPastur.ForMatrix(rows, columns);
        Preconditions.SameLength(singularValues.Count, Math.Min(rows, columns));
        Preconditions.Require(singularValues.All(s => s >= 0 && double.IsFinite(s)), "A singular value is negative or not finite.");

        // By the largest first, so that squares stay in range.
        double largest = singularValues.Max();
        Preconditions.Require(largest > 0, "All singular values are zero.");
        double mean = singularValues.Average(s => s / largest * (s / largest));
        double[] x = [.. singularValues.Select(s => s / largest * (s / largest) / mean).Order()];
        return new SpectrumAgainstMarchenkoPastur(
            law,
            ComparedProbabilities,
            [.. ComparedProbabilities.Select(law.Quantile)],
            [.. ComparedProbabilities.Select(p => DistributionDistance.Quantile(x, p))],
            DistributionDistance.KolmogorovSmirnov(x, law.Cumulative),
            x.Length);
    }
}
