using System.Numerics;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Transforms;

namespace TmLab.Measurement.Bases;

/// <summary>
/// Patterns ±1: B[k, n] = (−1)^popcount(h(k) &amp; n), h the identity in natural order, or the natural row of sequency k. As
/// B Bᵀ = N, T = D B / N by a fast transform.
/// </summary>
public sealed class HadamardBasis : IPatternBasis
{
    private readonly HadamardOrdering _ordering;
    private readonly int _bits;

    /// <summary>Makes the basis of N modes.</summary>
    /// <param name="modeCount">N, a power of two.</param>
    /// <param name="ordering">How the patterns are numbered.</param>
    public HadamardBasis(int modeCount, HadamardOrdering ordering)
    {
        Preconditions.Require(BitOperations.IsPow2(modeCount), "A Hadamard basis has a power of two of modes.");
        ModeCount = modeCount;
        _ordering = ordering;
        _bits = BitOperations.Log2((uint)modeCount);
    }

    /// <inheritdoc/>
    public int PatternCount => ModeCount;

    /// <inheritdoc/>
    public int ModeCount { get; }

    /// <inheritdoc/>
    public double InversionScale => 1.0 / ModeCount;

    /// <inheritdoc/>
    public double PatternEnergy(int pattern) => ModeCount;

    /// <inheritdoc/>
    public int PlaneRow(int pattern) =>
        _ordering == HadamardOrdering.Natural ? pattern : WalshHadamard.NaturalRowOfSequency(pattern, _bits);

    /// <inheritdoc/>
    public Complex Element(int pattern, int mode) =>
        BitOperations.PopCount((uint)(PlaneRow(pattern) & mode)) % 2 == 0 ? 1 : -1;

    /// <inheritdoc/>
    public void Invert(in ModePlanes planes)
    {
        WalshHadamard.Transform(planes.Real, planes.Rows, planes.Lanes);
        WalshHadamard.Transform(planes.Imaginary, planes.Rows, planes.Lanes);
    }

    /// <inheritdoc/>
    public double NoiseVariance(int mode, ReadOnlySpan<double> columnVariance) =>
        UnitaryNoise.Variance(columnVariance);
}
