namespace TmLab.Numerics.Statistics;

/// <summary>Distances between a sample and a distribution.</summary>
public static class DistributionDistance
{
    /// <summary>
    /// The Kolmogorov–Smirnov statistic sup |F_n(x) − F(x)| of a sample against a continuous distribution function, taken at both
    /// sides of every step of F_n, hence exact (Kolmogorov, G. Ist. Ital. Attuari 4, 83 (1933)).
    /// </summary>
    /// <param name="sample">The sample, in any order, at least one number, none NaN.</param>
    /// <param name="distribution">F, continuous and non-decreasing.</param>
    /// <exception cref="ArgumentException">The sample is empty or holds NaN.</exception>
    public static double KolmogorovSmirnov(IReadOnlyCollection<double> sample, Func<double, double> distribution)
    {
        Preconditions.AtLeast(sample.Count, 1);
        Preconditions.Require(!sample.Any(double.IsNaN), "The sample holds NaN.");
        double[] sorted = [.. sample.Order()];
        double distance = 0;
        for (int k = 0; k < sorted.Length; k++)
        {
            double expected = distribution(sorted[k]), before = (double)k / sorted.Length, after = (k + 1.0) / sorted.Length;
            distance = Math.Max(distance, Math.Max(expected - before, after - expected));
        }

        return distance;
    }

    /// <summary>
    /// A sample's quantile by linear interpolation between order statistics, position p(n − 1) from 0 (type 7 of Hyndman and Fan,
    /// Am. Stat. 50, 361 (1996)).
    /// </summary>
    /// <param name="sorted">The sample, ascending, at least one number.</param>
    /// <param name="probability">p in [0, 1].</param>
    /// <exception cref="ArgumentException">The sample is empty or p is out of range.</exception>
    public static double Quantile(IReadOnlyList<double> sorted, double probability)
    {
        Preconditions.AtLeast(sorted.Count, 1);
        Preconditions.InRange(probability, 0.0, 1.0);
        double position = probability * (sorted.Count - 1);
        int below = Math.Min((int)position, sorted.Count - 1), above = Math.Min(below + 1, sorted.Count - 1);
        return sorted[below] + ((position - below) * (sorted[above] - sorted[below]));
    }
}
