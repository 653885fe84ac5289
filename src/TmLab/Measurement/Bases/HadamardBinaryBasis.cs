using System.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Transforms;

namespace TmLab.Measurement.Bases;

/// <summary>
/// On/off patterns B = (1 + H)/2; pattern 0 is all on. As H = 2B − 1 and 1 · Tᵀ is pattern 0's column, the columns 2 D_k − D_0 are
/// those of Hadamard patterns, and T = (2/N) D H with D_0 taken off column 0.
/// </summary>
public sealed class HadamardBinaryBasis : IPatternBasis
{
    private readonly HadamardBasis _signed;

    /// <summary>Makes the basis of N modes.</summary>
    /// <param name="modeCount">N, a power of two.</param>
    /// <param name="ordering">How the patterns are numbered.</param>
    public HadamardBinaryBasis(int modeCount, HadamardOrdering ordering) => _signed = new HadamardBasis(modeCount, ordering);

    /// <inheritdoc/>
    public int PatternCount => _signed.PatternCount;

    /// <inheritdoc/>
    public int ModeCount => _signed.ModeCount;

    /// <inheritdoc/>
    public double InversionScale => 2.0 / ModeCount;

    /// <inheritdoc/>
    public double PatternEnergy(int pattern) => pattern == 0 ? ModeCount : ModeCount / 2.0;

    /// <inheritdoc/>
    public int PlaneRow(int pattern) => _signed.PlaneRow(pattern);

    /// <inheritdoc/>
    public Complex Element(int pattern, int mode) => (Complex.One + _signed.Element(pattern, mode)) / 2;

    /// <inheritdoc/>
    public void Invert(in ModePlanes planes)
    {
        InvertPlane(planes.Real, planes.ScratchReal, planes.Rows, planes.Lanes);
        InvertPlane(planes.Imaginary, planes.ScratchImaginary, planes.Rows, planes.Lanes);
    }

    /// <inheritdoc/>
    /// <remarks>Column 0 carries the noise of D_0 undiluted: measure pattern 0 more than once (trackers do).</remarks>
    public double NoiseVariance(int mode, ReadOnlySpan<double> columnVariance)
    {
        double spread = 4 * UnitaryNoise.Variance(columnVariance);
        double n = ModeCount;
        return mode == 0 ? spread + (columnVariance[0] * (1 - (4 / n))) : spread;
    }

    private static void InvertPlane(Span<float> plane, Span<float> scratch, int rows, int lanes)
    {
        Span<float> allOn = scratch[..lanes];
        plane[..lanes].CopyTo(allOn);
        WalshHadamard.Transform(plane, rows, lanes);
        float half = rows / 2f;
        for (int lane = 0; lane < lanes; lane++)
        {
            plane[lane] -= half * allOn[lane];
        }
    }
}
