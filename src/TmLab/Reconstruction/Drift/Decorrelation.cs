using System.Collections.Immutable;
using TmLab.Matrix;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The sample's change from the overlap of the trackers with the first of them. In a medium whose field correlation falls as e^{−t/τ}
/// the overlap falls as e^{−2t/τ}; the rate 1/τ is fitted by least squares, and believed when it exceeds four standard deviations.
/// </summary>
internal static class Decorrelation
{
    private const double Significance = 4;

    // How well the noise' share of the energies is known, relative.
    private const double NoiseKnowledge = 0.2;
    private const int NewtonSteps = 50;

    /// <summary>Fits the law; unknown with fewer than two trackers.</summary>
    /// <param name="phases">The fields of the groups.</param>
    /// <param name="pins">The trackers.</param>
    public static DecorrelationFacts Fit(GroupPhases phases, ImmutableArray<TrackerPin> pins)
    {
        if (pins.Length < 2)
        {
            return DecorrelationFacts.Unknown;
        }

        var overlap = new double[pins.Length];
        var variance = new double[pins.Length];
        for (int k = 0; k < pins.Length; k++)
        {
            (double measured, overlap[k]) = phases.Similarity(pins[k].Group, pins[0].Group);
            variance[k] = Variance(measured, overlap[k], phases.PixelVariance.Count(double.IsFinite));
        }

        double[] elapsed = [.. pins.Select(p => p.TimeS - pins[0].TimeS)];
        (double rate, double sd) = FitRate(elapsed, overlap, variance, AmplitudeSd(phases, pins, overlap));
        bool significant = rate > Significance * sd;
        return new DecorrelationFacts(
            [.. overlap], significant ? 1 / rate : double.NaN, significant ? sd / (rate * rate) : double.NaN, double.NaN);
    }

    /// <summary>The field's correlation with the start at a time since the start.</summary>
    public static double Correlation(DecorrelationFacts facts, double elapsedS) =>
        double.IsNaN(facts.TimeConstantS) ? 1 : Math.Exp(-elapsedS / facts.TimeConstantS);

    // Of a squared correlation coefficient of n independent pixels: 2 ρ² (1 − ρ²)²/n (Bartlett), scaled up with the noise' share.
    private static double Variance(double measured, double corrected, int pixels)
    {
        double scale = corrected / measured;
        double sampling = 2 * measured * (1 - measured) * (1 - measured) / Math.Max(1, pixels * TrackerPins.IndependentShare);
        return (scale * scale * sampling) + 1e-8;
    }

    // All overlaps share the first tracker and the error of the noise' share.
    private static double AmplitudeSd(GroupPhases phases, ImmutableArray<TrackerPin> pins, double[] overlap) =>
        1e-4 + Enumerable.Range(1, pins.Length - 1)
            .Average(k => NoiseKnowledge * ((overlap[k] / phases.Similarity(pins[k].Group, pins[0].Group).Measured) - 1));

    /// <summary>
    /// Gauss–Newton for amplitude A (known to be 1 up to its standard deviation) and rate r ≥ 0 in A e^{−2 r t}; the rate's standard
    /// deviation from the larger of the expected and the found scatter.
    /// </summary>
    private static (double Rate, double Sd) FitRate(double[] elapsed, double[] overlap, double[] variance, double amplitudeSd)
    {
        double rate = 0, amplitude = 1, marginal = 0;
        double prior = 1 / (amplitudeSd * amplitudeSd);
        for (int i = 0; i < NewtonSteps; i++)
        {
            double aa = prior, ar = 0, rr = 0, ga = prior * (1 - amplitude), gr = 0;
            for (int k = 1; k < elapsed.Length; k++)
            {
                double law = Math.Exp(-2 * rate * elapsed[k]), slope = -2 * elapsed[k] * amplitude * law;
                double rest = (overlap[k] - (amplitude * law)) / variance[k];
                (ga, gr) = (ga + (law * rest), gr + (slope * rest));
                (aa, ar, rr) = (aa + (law * law / variance[k]), ar + (law * slope / variance[k]), rr + (slope * slope / variance[k]));
            }

            marginal = rr - (ar * ar / aa);
            double step = (gr - (ar * ga / aa)) / marginal;
            double taken = Math.Max(0, rate + step) - rate;
            amplitude += (ga - (ar * taken)) / aa;
            rate += taken;
        }

        double squares = Enumerable.Range(1, elapsed.Length - 1)
            .Sum(k => Math.Pow(overlap[k] - (amplitude * Math.Exp(-2 * rate * elapsed[k])), 2) / variance[k]);
        double excess = Math.Max(1, squares / Math.Max(1, elapsed.Length - 2));
        return (rate, Math.Sqrt(excess / marginal));
    }
}
