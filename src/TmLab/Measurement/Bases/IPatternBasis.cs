using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Measurement.Bases;

/// <summary>
/// A set of K patterns over N input modes, B[k, n] being the field on macro-pixel n while pattern k is shown, and the way back
/// from the demodulated columns D = T Bᵀ to T. Immutable; may be used by several threads.
/// </summary>
public interface IPatternBasis
{
    /// <summary>Number of patterns K.</summary>
    int PatternCount { get; }

    /// <summary>Number of input modes N ≤ K.</summary>
    int ModeCount { get; }

    /// <summary>B[pattern, mode], by the definition.</summary>
    Complex Element(int pattern, int mode);

    /// <summary>Σ_n |B[pattern, n]|²: the energy of the pattern's column for a row of T of unit mean square.</summary>
    double PatternEnergy(int pattern);

    /// <summary>The plane row in which pattern <paramref name="pattern"/>'s column D[·, k] must stand before <see cref="Invert"/>: a permutation of 0 … K−1.</summary>
    int PlaneRow(int pattern);

    /// <summary>
    /// Turns columns D into columns of T in place: planes of K rows in, T · <see cref="InversionScale"/>⁻¹ in the first N rows out.
    /// </summary>
    void Invert(in ModePlanes planes);

    /// <summary>The factor by which the result of <see cref="Invert"/> (or its input) must be multiplied to be T.</summary>
    double InversionScale { get; }

    /// <summary>The variance of T[·, mode] when the columns D[·, k] carry independent noise of the variances given.</summary>
    /// <param name="mode">The input mode n.</param>
    /// <param name="columnVariance">One variance a pattern k.</param>
    double NoiseVariance(int mode, ReadOnlySpan<double> columnVariance);
}
