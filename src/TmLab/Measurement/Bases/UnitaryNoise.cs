namespace TmLab.Measurement.Bases;

/// <summary>Noise through a basis with B B† = N and entries of modulus 1: every element of T gets the same variance.</summary>
internal static class UnitaryNoise
{
    /// <summary>(1/N²) Σ_k var D_k.</summary>
    public static double Variance(ReadOnlySpan<double> columnVariance)
    {
        double sum = 0;
        foreach (double variance in columnVariance)
        {
            sum += variance;
        }

        return sum / ((double)columnVariance.Length * columnVariance.Length);
    }
}
