namespace TmLab.Simulation;

/// <summary>
/// Poisson numbers by inversion of the distribution function, summed from zero upwards (Devroye, Non-Uniform Random Variate
/// Generation, Springer 1986, chapter X.3.3). Exact to rounding, and used only for small means, where it is also quick.
/// </summary>
internal static class PoissonSampler
{
    /// <summary>
    /// From this mean on, shot noise is drawn from a normal distribution of the same mean and variance. Its skewness, which
    /// the normal distribution lacks, is 1/√mean ≤ 0.125 there.
    /// </summary>
    public const double NormalFromMean = 64;

    // The tail beyond 250 has less than 1e-60 of the probability at a mean of 64; uniform numbers resolve 1e-16.
    private const int Largest = 250;

    private static readonly double[] Reciprocals = [0, .. Enumerable.Range(1, Largest).Select(k => 1.0 / k)];

    /// <summary>The smallest k whose distribution function exceeds <paramref name="uniform"/>.</summary>
    /// <param name="mean">The mean, 0 … <see cref="NormalFromMean"/>.</param>
    /// <param name="uniform">A number uniform on [0, 1).</param>
    public static int Sample(double mean, double uniform)
    {
        double probability = PortableMath.Exp(-mean);
        double cumulative = probability;
        int k = 0;
        while (uniform >= cumulative && k < Largest)
        {
            k++;
            probability *= mean * Reciprocals[k];
            cumulative += probability;
        }

        return k;
    }
}
