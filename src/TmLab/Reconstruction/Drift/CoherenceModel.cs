namespace TmLab.Reconstruction.Drift;

/// <summary>
/// At each pixel the background and the modulation of the fringes are not independent: with reference intensity α and a mutual
/// coherence that β takes up, a = α + β |D|² whatever the pattern (for a coherent reference β = 1/α, D = R* E). Fitted over all patterns,
/// this tells more of the steps than the fringes alone: four free steps are otherwise undetermined by one.
/// </summary>
/// <param name="Alpha">α, counts.</param>
/// <param name="Beta">β, 1/counts.</param>
/// <param name="Variance">Variance of a count about the model, counts²; infinite for pixels that cannot serve.</param>
internal sealed record CoherenceModel(double[] Alpha, double[] Beta, double[] Variance)
{
    /// <summary>Fewer patterns than this do not determine α and β well enough.</summary>
    public const int FewestGroups = 8;

    /// <summary>Fits α and β of one pixel by least squares; false where they make no sense.</summary>
    /// <param name="background">a, one number a pattern; NaN to leave it out.</param>
    /// <param name="modulation">|D|², likewise.</param>
    /// <param name="alpha">α.</param>
    /// <param name="beta">β.</param>
    public static bool TryFit(ReadOnlySpan<double> background, ReadOnlySpan<double> modulation, out double alpha, out double beta)
    {
        double n = 0, sa = 0, sq = 0, saq = 0, sqq = 0;
        for (int k = 0; k < background.Length; k++)
        {
            if (double.IsNaN(background[k]))
            {
                continue;
            }

            (double a, double q) = (background[k], modulation[k]);
            (n, sa, sq, saq, sqq) = (n + 1, sa + a, sq + q, saq + (a * q), sqq + (q * q));
        }

        double spread = sqq - (sq * sq / n);
        beta = (saq - (sa * sq / n)) / spread;
        alpha = (sa - (beta * sq)) / n;
        return n >= FewestGroups && spread > 0 && beta > 0 && alpha > 0;
    }
}
