using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement.Bases;

namespace TmLab.Reconstruction;

/// <summary>
/// The fidelity of a matrix whose columns D are mixed of what they should be, D_k, of their conjugates and of those of an independent
/// matrix D′: D̂_k = u_k c_k D_k + v_k D_k* + s_k D′_k, s_k = √(1 − c_k²). What u c, v and s have in common over the patterns passes the
/// inverse basis as a whole; what is different from pattern to pattern passes it as noise. For T of independent elements
/// fidelity = |ū|²/(|ū|² + |v̄|² + s̄² + ε), ε = (1/N) Σ_n var T_n for columns of variances (|u − ū|² + |v − v̄|² + (s − s̄)²) Σ_n |B_kn|².
/// </summary>
internal sealed class ColumnMixture
{
    private readonly IPatternBasis _basis;
    private readonly ImmutableArray<int> _lost;
    private readonly double _lostShare;
    private readonly double[] _gain;

    /// <summary>Prepares it.</summary>
    /// <param name="basis">The patterns.</param>
    /// <param name="lost">Patterns whose column is missing.</param>
    /// <param name="lostShare">Share of its column's energy that a missing pattern takes with it: 1, or less where something is put in its place.</param>
    public ColumnMixture(IPatternBasis basis, ImmutableArray<int> lost, double lostShare)
    {
        (_basis, _lost, _lostShare) = (basis, lost, lostShare);
        _gain = [.. Enumerable.Range(0, basis.PatternCount).Select(basis.PatternEnergy)];
    }

    /// <summary>Fidelity with nothing wrong but the missing patterns.</summary>
    public double FidelityOfLost() => Fidelity([ColumnErrors.None(_gain.Length)], null, withLost: true);

    /// <summary>Fidelity with a changing sample alone.</summary>
    public double FidelityOfDecorrelation(double[] correlation) => Fidelity([ColumnErrors.None(_gain.Length)], correlation, withLost: false);

    /// <summary>Fidelity with errors of the phases alone.</summary>
    public double Fidelity(IReadOnlyCollection<ColumnErrors> draws) => Fidelity(draws, null, withLost: false);

    /// <summary>Fidelity with all of it.</summary>
    public double Fidelity(IReadOnlyCollection<ColumnErrors> draws, double[]? correlation, bool withLost)
    {
        int patterns = _gain.Length;
        double coherent = 0, other = 0;
        var scatter = new double[patterns];
        HashSet<int> lost = withLost ? [.. _lost] : [];
        foreach (ColumnErrors errors in draws)
        {
            Complex[] direct = [.. errors.Direct.Select((u, k) => lost.Contains(k) ? 1 - _lostShare : u * (correlation?[k] ?? 1))];
            Complex[] conjugate = [.. errors.Conjugate.Select((v, k) => lost.Contains(k) ? 0 : v)];
            Complex[] later = [.. direct.Select((_, k) => (Complex)(lost.Contains(k) || correlation is null ? 0 : Later(correlation[k])))];
            coherent += AddScatter(direct, scatter, lost) / draws.Count;
            other += (AddScatter(conjugate, scatter, lost) + AddScatter(later, scatter, lost)) / draws.Count;
        }

        double[] variance = [.. scatter.Select((s, k) => s * _gain[k] / draws.Count)];
        double noise = Enumerable.Range(0, _basis.ModeCount).Average(n => _basis.NoiseVariance(n, variance));
        return coherent / (coherent + other + noise);
    }

    private static double Later(double correlation) => Math.Sqrt(Math.Max(0, 1 - (correlation * correlation)));

    private double AddScatter(Complex[] x, double[] scatter, HashSet<int> lost)
    {
        Complex mean = x.Aggregate(Complex.Zero, (a, b) => a + b) / x.Length;
        for (int k = 0; k < x.Length; k++)
        {
            // Half a column in place of a missing one leaves half of the error's energy, not a quarter: the half that is put there
            // is right.
            double share = lost.Contains(k) ? _lostShare : 1;
            scatter[k] += share > 0 ? Square(x[k] - mean) / share : 0;
        }

        return Square(mean);
    }

    private static double Square(Complex z) => (z.Real * z.Real) + (z.Imaginary * z.Imaginary);
}
