using System.Collections.Immutable;
using System.Numerics;

namespace TmLab.Measurement.Bases;

/// <summary>The list of bases: a new one is a new file and a line here.</summary>
public static class PatternBases
{
    /// <summary>Makes the basis that a measurement used.</summary>
    /// <param name="modes">What the manifest says.</param>
    /// <param name="customPatterns">B, row-major, for custom patterns; not looked at otherwise.</param>
    public static IPatternBasis Create(ModeDescription modes, ImmutableArray<Complex> customPatterns) => modes.Basis switch
    {
        BasisKind.Hadamard => new HadamardBasis(modes.ModeCount, modes.Ordering),
        BasisKind.HadamardBinary => new HadamardBinaryBasis(modes.ModeCount, modes.Ordering),
        BasisKind.Fourier => new FourierBasis(modes.Grid),
        BasisKind.Pixel => new PixelBasis(modes.ModeCount),
        BasisKind.Custom => new CustomBasis(modes.PatternCount, modes.ModeCount, customPatterns),
        _ => throw new ArgumentOutOfRangeException(nameof(modes), modes.Basis, "There is no such basis."),
    };
}
