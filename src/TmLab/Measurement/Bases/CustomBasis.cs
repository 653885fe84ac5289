using System.Collections.Immutable;
using System.Numerics;
using TmLab.Numerics;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;

namespace TmLab.Measurement.Bases;

/// <summary>
/// Patterns given as a complex K × N matrix with K ≥ N: Tᵀ = B⁺ Dᵀ with the pseudo-inverse B⁺ (least squares when K &gt; N). The
/// product costs N · K operations a pixel.
/// </summary>
public sealed class CustomBasis : IPatternBasis
{
    /// <summary>Patterns whose singular values spread by more than this cannot be told apart in single precision.</summary>
    public const double LargestCondition = 1e5;

    private readonly ImmutableArray<Complex> _patterns;
    private readonly Complex64[] _inverse;

    /// <summary>Takes the patterns and inverts them.</summary>
    /// <param name="patternCount">K.</param>
    /// <param name="modeCount">N ≤ K.</param>
    /// <param name="patterns">B, row-major, K · N finite numbers.</param>
    /// <exception cref="ArgumentException">The shape is wrong.</exception>
    public CustomBasis(int patternCount, int modeCount, ImmutableArray<Complex> patterns)
    {
        Preconditions.InRange(modeCount, 1, patternCount);
        PatternCount = patternCount;
        ModeCount = modeCount;
        _patterns = patterns;
        var inverse = new PseudoInverse(patterns.AsSpan(), patternCount, modeCount, LargestCondition);
        Condition = inverse.Condition;
        _inverse = [.. inverse.Elements.Select(Complex64.FromComplex)];
    }

    /// <summary>Largest over smallest singular value of B; infinite when the patterns are dependent.</summary>
    public double Condition { get; }

    /// <inheritdoc/>
    public int PatternCount { get; }

    /// <inheritdoc/>
    public int ModeCount { get; }

    /// <inheritdoc/>
    public double InversionScale => 1;

    /// <inheritdoc/>
    public double PatternEnergy(int pattern) => 
        _patterns.AsSpan().Slice(pattern * ModeCount, ModeCount).ToArray().Sum(b => (b.Real * b.Real) + (b.Imaginary * b.Imaginary));

    /// <inheritdoc/>
    public int PlaneRow(int pattern) => pattern;

    /// <inheritdoc/>
    public Complex Element(int pattern, int mode) => _patterns[(pattern * ModeCount) + mode];

    /// <inheritdoc/>
    public void Invert(in ModePlanes planes) => PlaneProduct.Run(planes, _inverse);

    /// <inheritdoc/>
    public double NoiseVariance(int mode, ReadOnlySpan<double> columnVariance)
    {
        double sum = 0;
        for (int k = 0; k < PatternCount; k++)
        {
            sum += _inverse[(mode * PatternCount) + k].SquaredMagnitude * columnVariance[k];
        }

        return sum;
    }
}
