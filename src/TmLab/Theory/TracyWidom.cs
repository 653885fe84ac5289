using TmLab.Numerics;
using TmLab.Numerics.Statistics;

namespace TmLab.Theory;

/// <summary>
/// The law of the largest eigenvalue of complex random matrices at the edge, β = 2 (Tracy and Widom, Commun. Math. Phys. 159, 151
/// (1994)): F₂(s) = det(1 − K) with the Airy kernel K(x, y) = (Ai(x) Ai′(y) − Ai′(x) Ai(y)) / (x − y) on (s, ∞), by Gauss–Legendre
/// quadrature (Bornemann, Math. Comp. 79, 871 (2010)). Error below 10⁻⁹ for s ≥ −8; below −8, F₂ &lt; 10⁻¹⁸ is returned as 0.
/// </summary>
public static class TracyWidom
{
    /// <summary>Mean of F₂ (Bornemann, Markov Process. Relat. Fields 16, 803 (2010)).</summary>
    public const double Mean = -1.771086807411;

    /// <summary>Variance of F₂ (the same source).</summary>
    public const double Variance = 0.8131947928329;

    private const int Nodes = 64;
    private const double Infinity = 16;
    private const double Lowest = -8;

    /// <summary>F₂(s), the probability of at most s.</summary>
    /// <exception cref="ArgumentOutOfRangeException">s is NaN.</exception>
    public static double Cumulative(double s)
    {
        Preconditions.InRange(s, double.NegativeInfinity, double.PositiveInfinity);
        if (s <= Lowest || s >= Infinity)
        {
            return s <= Lowest ? 0 : 1;
        }

        (double[] x, double[] weight) = GaussLegendre.Rule(Nodes, s, Infinity);
        double[] airy = [.. x.Select(AiryFunction.Value)], slope = [.. x.Select(AiryFunction.Slope)];
        var matrix = new double[Nodes, Nodes];
        for (int i = 0; i < Nodes; i++)
        {
            for (int j = 0; j < Nodes; j++)
            {
                double kernel = i == j
                    ? (slope[i] * slope[i]) - (x[i] * airy[i] * airy[i])
                    : ((airy[i] * slope[j]) - (slope[i] * airy[j])) / (x[i] - x[j]);
                matrix[i, j] = (i == j ? 1 : 0) - (Math.Sqrt(weight[i] * weight[j]) * kernel);
            }
        }

        return Math.Clamp(PositiveDeterminant(matrix), 0, 1);
    }

    /// <summary>The s with F₂(s) = p, by bisection to 10⁻⁸.</summary>
    /// <param name="probability">p in [10⁻⁶, 1 − 10⁻⁶].</param>
    /// <exception cref="ArgumentOutOfRangeException">p is not in that range.</exception>
    public static double Quantile(double probability)
    {
        Preconditions.InRange(probability, 1e-6, 1 - 1e-6);
        double low = Lowest, high = 6;
        while (high - low > 1e-8)
        {
            double middle = (low + high) / 2;
            (low, high) = Cumulative(middle) < probability ? (middle, high) : (low, middle);
        }

        return (low + high) / 2;
    }

    /// <summary>
    /// The largest eigenvalue λ of X X† for an m × n matrix of independent complex elements with E|x|² = 1 in the law's units:
    /// (λ − μ)/σ with μ = (√m + √n)², σ = (√m + √n)(1/√m + 1/√n)^{1/3} (Johansson, Commun. Math. Phys. 209, 437 (2000)).
    /// </summary>
    /// <param name="eigenvalue">λ.</param>
    /// <param name="m">Rows, ≥ 1.</param>
    /// <param name="n">Columns, ≥ 1.</param>
    /// <exception cref="ArgumentOutOfRangeException">A size is below 1.</exception>
    public static double Standardise(double eigenvalue, int m, int n)
    {
        Preconditions.InRange(m, 1, int.MaxValue);
        Preconditions.InRange(n, 1, int.MaxValue);
        double sum = Math.Sqrt(m) + Math.Sqrt(n);
        return (eigenvalue - (sum * sum)) / (sum * Math.Cbrt((1 / Math.Sqrt(m)) + (1 / Math.Sqrt(n))));
    }

    // Gaussian elimination without pivots: 1 − K is positive definite for every s.
    private static double PositiveDeterminant(double[,] matrix)
    {
        int size = matrix.GetLength(0);
        double determinant = 1;
        for (int k = 0; k < size; k++)
        {
            determinant *= matrix[k, k];
            for (int i = k + 1; i < size; i++)
            {
                double factor = matrix[i, k] / matrix[k, k];
                for (int j = k + 1; j < size; j++)
                {
                    matrix[i, j] -= factor * matrix[k, j];
                }
            }
        }

        return determinant;
    }
}
