using TmLab.Numerics;

namespace TmLab.Theory;

/// <summary>
/// The mean ratio of consecutive level spacings, r̃ = min(s_i, s_{i+1}) / max(s_i, s_{i+1}), which needs no unfolding: 0.5996 for levels
/// that repel as those of complex matrices do, 0.3863 for independent ones (Atas, Bogomolny, Giraud and Roux, Phys. Rev. Lett. 110,
/// 084101 (2013), table I). For a transmission matrix the levels are the squared singular values.
/// </summary>
public static class SpacingRatios
{
    /// <summary>⟨r̃⟩ of the Gaussian unitary ensemble, large N; ± 0.0001.</summary>
    public const double UnitaryMean = 0.5996;

    /// <summary>⟨r̃⟩ of the Gaussian orthogonal ensemble, large N; ± 0.0001.</summary>
    public const double OrthogonalMean = 0.5307;

    /// <summary>⟨r̃⟩ of independent levels, 2 ln 2 − 1.</summary>
    public const double PoissonMean = 0.38629436111989062;

    /// <summary>√n times the standard deviation of the mean of n ratios of one spectrum (simulation; neighbouring ratios share a spacing).</summary>
    public const double ScaledDeviation = 0.30;

    /// <summary>The part of the levels left out at each end, where the density changes fast.</summary>
    public const double EdgePart = 0.12;

    /// <summary>⟨r̃⟩ over a spectrum, <see cref="EdgePart"/> of the levels left out at each end.</summary>
    /// <param name="levels">Levels in any order; at least 3 must remain. Two equal spacings of 0 count as a ratio of 0.</param>
    /// <exception cref="ArgumentException">There are too few.</exception>
    public static double Mean(IReadOnlyCollection<double> levels)
    {
        double[] sorted = [.. levels.Order()];
        int skipped = (int)(EdgePart * sorted.Length);
        double[] kept = sorted[skipped..^skipped];
        Preconditions.AtLeast(kept.Length, 3);
        double sum = 0;
        for (int k = 0; k < kept.Length - 2; k++)
        {
            double first = kept[k + 1] - kept[k], second = kept[k + 2] - kept[k + 1], larger = Math.Max(first, second);
            sum += larger > 0 ? Math.Min(first, second) / larger : 0;
        }

        return sum / (kept.Length - 2);
    }
}
