using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Measurement.Bases;

/// <summary>One macro-pixel at a time: B is the identity and T = D.</summary>
public sealed class PixelBasis : IPatternBasis
{
    /// <summary>Makes the basis of N modes.</summary>
    public PixelBasis(int modeCount) => ModeCount = modeCount;

    /// <inheritdoc/>
    public int PatternCount => ModeCount;

    /// <inheritdoc/>
    public int ModeCount { get; }

    /// <inheritdoc/>
    public double InversionScale => 1;

    /// <inheritdoc/>
    public double PatternEnergy(int pattern) => 1;

    /// <inheritdoc/>
    public int PlaneRow(int pattern) => pattern;

    /// <inheritdoc/>
    public Complex Element(int pattern, int mode) => pattern == mode ? Complex.One : Complex.Zero;

    /// <inheritdoc/>
    public void Invert(in ModePlanes planes)
    {
        // Nothing to do: each pattern is one mode.
    }

    /// <inheritdoc/>
    public double NoiseVariance(int mode, ReadOnlySpan<double> columnVariance) => columnVariance[mode];
}
