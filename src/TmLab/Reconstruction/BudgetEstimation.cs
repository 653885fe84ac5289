using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction;

/// <summary>The error budget of a matrix: see <see cref="ErrorBudget"/> for the causes and <see cref="ColumnMixture"/> for the arithmetic.</summary>
internal static class BudgetEstimation
{
    /// <summary>Adds up the causes.</summary>
    /// <param name="evidence">What was found on the way.</param>
    /// <param name="rowNoise">Noise energy of each row, in the unit of the row energies; NaN where it is not known.</param>
    public static (ErrorBudget Budget, DecorrelationFacts Decorrelation) Make(MatrixEvidence evidence, double[] rowNoise)
    {
        IPatternBasis basis = evidence.Basis;
        var mixture = new ColumnMixture(basis, evidence.Weights.LostPatterns, FrameWeightTable.LostShare(basis));
        PhaseErrors.Outcome phases = PhaseErrors.Draw(evidence.Facts.Schedule, evidence.TotalPhaseRad, evidence.Drift, basis, mixture);
        DecorrelationFacts decorrelation = evidence.Drift.Facts.Decorrelation;
        double[] correlation = Correlation(evidence.Facts.Schedule, decorrelation, basis.PatternCount);
        bool moves = !double.IsNaN(decorrelation.TimeConstantS);
        bool isWatched = decorrelation.Overlap.Length >= 2;
        double noise = 1 - SignalShare(evidence, rowNoise);
        double saturation = evidence.Survey.SaturatedShare.Where((_, p) => evidence.Pixels.Valid[p]).DefaultIfEmpty(0).Average();
        double columns = mixture.Fidelity(phases.Columns, moves ? correlation : null, withLost: true);
        double factor = moves ? Math.Pow(correlation.Average(), 2) : isWatched ? 1 : double.NaN;
        var budget = new ErrorBudget(
            noise,
            phases.Drift,
            moves ? 1 - mixture.FidelityOfDecorrelation(correlation) : isWatched ? 0 : double.NaN,
            phases.Steps,
            saturation,
            1 - mixture.FidelityOfLost(),
            columns * (1 - saturation) * (double.IsNaN(noise) ? 1 : 1 - noise));
        return (budget, decorrelation with { EnhancementFactor = factor });
    }

    /// <summary>The mean over valid rows of what share of their energy is not noise.</summary>
    private static double SignalShare(MatrixEvidence evidence, double[] rowNoise)
    {
        double modes = evidence.Basis.ModeCount;
        double[] shares =
        [
            .. evidence.RowEnergy.Select((e, p) => (Energy: e, Noise: rowNoise[p], Valid: evidence.Pixels.Valid[p]))
                .Where(r => r.Valid && r.Energy > 0)
                // Of the noise, one part in N lies along the signal and does not count as an error.
                .Select(r => Math.Clamp((r.Energy - (r.Noise * (1 - (1 / modes)))) / r.Energy, 0, 1)),
        ];
        return shares.DefaultIfEmpty(double.NaN).Average();
    }

    // Between the start and the time at which a pattern was shown, its showings averaged.
    private static double[] Correlation(Schedule schedule, DecorrelationFacts facts, int patterns)
    {
        var sum = new double[patterns];
        var showings = new int[patterns];
        foreach (StepGroup group in schedule.Groups)
        {
            double time = group.Frames.Average(f => schedule.Frames[f].TimeS) - schedule.Frames[0].TimeS;
            sum[group.Mode] += Decorrelation.Correlation(facts, time);
            showings[group.Mode]++;
        }

        double mean = sum.Sum() / Math.Max(1, showings.Sum());
        return [.. sum.Select((s, k) => showings[k] > 0 ? s / showings[k] : mean)];
    }
}
