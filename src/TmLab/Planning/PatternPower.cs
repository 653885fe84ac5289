using System.Numerics;
using TmLab.Measurement;
using TmLab.Measurement.Bases;

namespace TmLab.Planning;

/// <summary>How much light each pattern has, and how noise and errors of its column reach the matrix.</summary>
internal static class PatternPower
{
    // The modes at which a basis' noise is looked at; all but the first are alike in the complete bases.
    private const int SampledModes = 32;

    /// <summary>P_k = Σ_n |B[k, n]|²: pattern k has P_k / N of the light of all macro-pixels.</summary>
    public static double[] Of(IPatternBasis basis, BasisKind kind) => kind switch
    {
        BasisKind.Hadamard or BasisKind.Fourier => [.. Enumerable.Repeat((double)basis.ModeCount, basis.PatternCount)],
        BasisKind.Pixel => [.. Enumerable.Repeat(1.0, basis.PatternCount)],
        BasisKind.HadamardBinary => [.. Enumerable.Range(0, basis.PatternCount).Select(k => basis.PlaneRow(k) == 0 ? basis.ModeCount : basis.ModeCount / 2.0)],
        _ => [.. Enumerable.Range(0, basis.PatternCount).Select(k => Enumerable.Range(0, basis.ModeCount).Sum(n => SquaredMagnitude(basis.Element(k, n))))],
    };

    /// <summary>Σ_n var T[·, n] for independent errors of the columns with the variances given.</summary>
    public static double TotalVariance(IPatternBasis basis, double[] columnVariance)
    {
        int others = basis.ModeCount - 1;
        double first = basis.NoiseVariance(0, columnVariance);
        int looked = Math.Min(SampledModes, others);
        double mean = looked == 0
            ? 0
            : Enumerable.Range(0, looked).Average(i => basis.NoiseVariance(1 + (int)((long)i * others / looked), columnVariance));
        return first + (mean * others);
    }

    private static double SquaredMagnitude(Complex b) => (b.Real * b.Real) + (b.Imaginary * b.Imaginary);
}
