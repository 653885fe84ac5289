using System.Numerics;
using TmLab.Numerics;

namespace TmLab.Shaping;

/// <summary>
/// What a focus gains: η = intensity at the target over its mean for random phase-only inputs of the same power. Ensemble means
/// for a medium of independent complex Gaussian elements.
/// </summary>
public static class FocusEnhancement
{
    /// <summary>Phase-only control of N modes: 1 + (π/4)(N − 1). Vellekoop &amp; Mosk, Opt. Lett. 32, 2309 (2007).</summary>
    public static double PhaseOnly(int modes) => 1 + (Math.PI / 4 * (modes - 1));

    /// <summary>
    /// Phase-only control in L equal levels: 1 + (π/4)(N − 1) sinc²(1/L), sinc x = sin(πx)/(πx): uniform phase errors of ±π/L.
    /// </summary>
    /// <param name="modes">N ≥ 1.</param>
    /// <param name="levels">L ≥ 2.</param>
    public static double PhaseLevels(int modes, int levels)
    {
        Preconditions.InRange(levels, 2, int.MaxValue);
        double x = Math.PI / levels;
        double sinc = Math.Sin(x) / x;
        return 1 + (Math.PI / 4 * (modes - 1) * sinc * sinc);
    }

    /// <summary>What a mask gives on the row it was made from: |Σ_n T_n e_n|² / Σ_n |T_n|² for modulator fields e of modulus 1.</summary>
    public static double OnRow(TargetRow row, ReadOnlySpan<Complex> field)
    {
        Preconditions.SameLength(field.Length, row.Elements.Length);
        Complex sum = Complex.Zero;
        for (int n = 0; n < field.Length; n++)
        {
            sum += row.Elements[n] * field[n];
        }

        return ((sum.Real * sum.Real) + (sum.Imaginary * sum.Imaginary)) / row.Energy;
    }

    /// <summary>
    /// What the mask will give at the bench: only the signal's share of the row's energy focuses,
    /// 1 + (η_row − 1) · share. Same algebra as 1 + (π/4)(N − 1) SNR/(1 + SNR).
    /// </summary>
    /// <param name="onRow">η on the measured row.</param>
    /// <param name="signalShare">SNR/(1 + SNR); NaN is passed on.</param>
    public static double Predicted(double onRow, double signalShare) => 1 + ((onRow - 1) * signalShare);
}
