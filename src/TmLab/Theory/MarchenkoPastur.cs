using TmLab.Numerics;

namespace TmLab.Theory;

/// <summary>
/// The law of the eigenvalues x of W = X X†/n for X of m × n independent elements with E|X|² = 1, in the limit of large sizes at
/// γ = m/n: f(x) = √((b − x)(x − a)) / (2πγx) on [a, b] with a, b = (1 ∓ √γ)², and for γ &gt; 1 the weight 1 − 1/γ at x = 0
/// (Marchenko and Pastur, Math. USSR-Sb. 1, 457 (1967)). The mean of x is 1. With s = √x this is the law of singular values
/// normalised to ⟨s²⟩ = 1; γ = 1 is the quarter circle. Immutable.
/// </summary>
public sealed class MarchenkoPastur
{
    private const double QuantileTolerance = 1e-13;
    private const int IterationsAtMost = 200;
    private const int QuadratureNodes = 512;

    // For γ > 1 the law of the smaller matrix X†X/n, whose eigenvalues are the same besides zeros, stretched by γ.
    private readonly double _smallRatio;
    private readonly double _stretch;

    /// <summary>The law at a ratio.</summary>
    /// <param name="aspectRatio">γ in (0, 10⁶].</param>
    /// <exception cref="ArgumentOutOfRangeException">γ is not in that range.</exception>
    public MarchenkoPastur(double aspectRatio)
    {
        Preconditions.InRange(aspectRatio, double.Epsilon, 1e6);
        AspectRatio = aspectRatio;
        _smallRatio = Math.Min(aspectRatio, 1 / aspectRatio);
        _stretch = Math.Max(1, aspectRatio);
        double root = Math.Sqrt(aspectRatio);
        LowerEdge = (1 - root) * (1 - root);
        UpperEdge = (1 + root) * (1 + root);
        AtomAtZero = Math.Max(0, 1 - (1 / aspectRatio));
    }

    /// <summary>The law for the singular values of a P × N matrix, x = s̃² normalised to mean 1: γ = min/max, so that there is no atom.</summary>
    /// <exception cref="ArgumentOutOfRangeException">A size is below 1.</exception>
    public static MarchenkoPastur ForMatrix(int rows, int columns)
    {
        Preconditions.InRange(rows, 1, int.MaxValue);
        Preconditions.InRange(columns, 1, int.MaxValue);
        return new MarchenkoPastur((double)Math.Min(rows, columns) / Math.Max(rows, columns));
    }

    /// <summary>γ.</summary>
    public double AspectRatio { get; }

    /// <summary>a = (1 − √γ)².</summary>
    public double LowerEdge { get; }

    /// <summary>b = (1 + √γ)².</summary>
    public double UpperEdge { get; }

    /// <summary>The weight at x = 0: 1 − 1/γ for γ &gt; 1, else 0.</summary>
    public double AtomAtZero { get; }

    /// <summary>f(x), the atom left out; 0 outside the edges.</summary>
    public double Density(double x) => x <= LowerEdge || x >= UpperEdge
        ? 0
        : Math.Sqrt((UpperEdge - x) * (x - LowerEdge)) / (2 * Math.PI * AspectRatio * x);

    /// <summary>The density of s = √x: 2 s f(s²) = √((b − s²)(s² − a)) / (πγs). At γ = 1: √(4 − s²)/π, also at s = 0.</summary>
    public double SingularValueDensity(double s)
    {
        if (LowerEdge == 0 && s >= 0 && s <= 2)
        {
            return Math.Sqrt(4 - (s * s)) / Math.PI;
        }

        return s <= 0 ? 0 : 2 * s * Density(s * s);
    }

    /// <summary>
    /// F(x), the probability of at most x. For γ ≤ 1 in closed form, with c = (2x − a − b)/(b − a):
    /// [√((b−x)(x−a)) − (a+b)/2 · acos c + 2√(ab) · atan(√(a/b) √((b−x)/(x−a))) + (π/2)(a + b − 2√(ab))] / (2πγ), by integration of the
    /// density; for γ &gt; 1: 1 − 1/γ + F_{1/γ}(x/γ)/γ.
    /// </summary>
    public double Cumulative(double x)
    {
        if (x < 0)
        {
            return 0;
        }

        return AtomAtZero + ((1 - AtomAtZero) * SmallCumulative(x / _stretch));
    }

    /// <summary>F(s²), the probability of a singular value of at most s.</summary>
    public double SingularValueCumulative(double s) => s < 0 ? 0 : Cumulative(s * s);

    /// <summary>The smallest x with F(x) ≥ p, by Newton's iteration kept within a bracket; error below 10⁻¹⁰ for 10⁻⁶ ≤ p ≤ 1 − 10⁻⁶.</summary>
    /// <param name="probability">p in [0, 1].</param>
    /// <exception cref="ArgumentOutOfRangeException">p is not in that range.</exception>
    public double Quantile(double probability)
    {
        Preconditions.InRange(probability, 0.0, 1.0);
        if (probability <= AtomAtZero)
        {
            return AtomAtZero > 0 ? 0 : LowerEdge;
        }

        if (probability == 1)
        {
            return UpperEdge;
        }

        // Singular values: near γ = 1 the density of x is infinite at 0 while that of s is bounded, so that Newton's steps are tame.
        double low = Math.Sqrt(LowerEdge), high = Math.Sqrt(UpperEdge), s = (low + high) / 2;
        for (int iteration = 0; iteration < IterationsAtMost; iteration++)
        {
            double excess = SingularValueCumulative(s) - probability;
            (low, high) = excess < 0 ? (s, high) : (low, s);
            double step = excess / SingularValueDensity(s), next = s - step;
            if (Math.Abs(step) <= QuantileTolerance * s || high - low <= QuantileTolerance * high)
            {
                break;
            }

            s = next > low && next < high ? next : (low + high) / 2;
        }

        return s * s;
    }

    /// <summary>
    /// ⟨x^k⟩ = Σ_{r=0}^{k−1} γ^r/(r+1) · C(k, r) C(k−1, r): 1, 1 + γ, 1 + 3γ + γ², … (Narayana polynomials; Bai and Silverstein,
    /// Spectral Analysis of Large Dimensional Random Matrices (2010), lemma 3.1).
    /// </summary>
    /// <param name="order">k in [0, 30].</param>
    /// <exception cref="ArgumentOutOfRangeException">k is not in that range.</exception>
    public double Moment(int order)
    {
        Preconditions.InRange(order, 0, 30);
        double sum = order == 0 ? 1 : 0, power = 1, upper = 1, lower = 1;
        for (int r = 0; r < order; r++)
        {
            sum += power * upper * lower / (r + 1);
            power *= AspectRatio;
            upper *= (double)(order - r) / (r + 1);
            lower *= (double)(order - 1 - r) / (r + 1);
        }

        return sum;
    }

    /// <summary>
    /// ⟨√x⟩, the mean normalised singular value: ∫ √((b − s²)(s² − a)) ds / (πγ), by the trapezium rule in θ of
    /// s = mid − half · cos θ, where the integrand is periodic: error below 10⁻¹¹ at γ = 1, rounding elsewhere.
    /// </summary>
    public double MeanSingularValue()
    {
        double low = Math.Abs(1 - Math.Sqrt(_smallRatio)), high = 1 + Math.Sqrt(_smallRatio);
        double middle = (high + low) / 2, half = (high - low) / 2, sum = 0;
        for (int k = 1; k < QuadratureNodes; k++)
        {
            (double sine, double cosine) = Math.SinCos(Math.PI * k / QuadratureNodes);
            double s = middle - (half * cosine);
            sum += half * sine * half * sine * Math.Sqrt((high + s) * (s + low));
        }

        double small = sum * Math.PI / QuadratureNodes / (Math.PI * _smallRatio);
        return (1 - AtomAtZero) * Math.Sqrt(_stretch) * small;
    }

    // F for γ ≤ 1.
    private double SmallCumulative(double x)
    {
        double g = _smallRatio, root = Math.Sqrt(g), a = (1 - root) * (1 - root), b = (1 + root) * (1 + root);
        if (x <= a)
        {
            return 0;
        }

        if (x >= b)
        {
            return 1;
        }

        // acos c = 2 atan √((b − x)/(x − a)), which keeps its digits near the edges.
        double angle = 2 * Math.Atan2(Math.Sqrt(b - x), Math.Sqrt(x - a));
        double edge = Math.Atan(Math.Sqrt(a / b * (b - x) / (x - a)));

        // (a + b)/2 = 1 + γ, √(ab) = 1 − γ.
        double sum = Math.Sqrt((b - x) * (x - a)) - ((1 + g) * angle) + (2 * (1 - g) * edge) + (2 * Math.PI * g);
        return Math.Clamp(sum / (2 * Math.PI * g), 0, 1);
    }
}
