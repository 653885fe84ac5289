using System.Collections.Immutable;
using TmLab.Matrix;

namespace TmLab.Reconstruction;

/// <summary>A cause of error with what it costs and what helps against it.</summary>
/// <param name="Name">The cause, in a word or two.</param>
/// <param name="Loss">1 − fidelity by this cause alone; NaN where it cannot be known.</param>
/// <param name="Remedy">What to change at the bench.</param>
public sealed record VerdictPart(string Name, double Loss, string Remedy);

/// <summary>How far a matrix can be trusted, from its facts alone. Immutable.</summary>
/// <param name="PredictedFidelity">
/// Mean over valid rows of |⟨a,b⟩|²/(⟨a,a⟩⟨b,b⟩) to expect against the matrix at the start of the measurement; NaN where nothing is known.
/// </param>
/// <param name="IsUpperBound">Whether a cause is not known, so that the fidelity can only be lower.</param>
/// <param name="PredictedEnhancement">
/// Of one focus by phases alone, 1 + (π/4)(N − 1) · fidelity over the N valid modes: Vellekoop &amp; Mosk, Opt. Lett. 32, 2309 (2007), with
/// |g|² for a matrix known up to noise.
/// </param>
/// <param name="IdealEnhancement">The same with fidelity 1.</param>
/// <param name="SignalToNoise">Mean |t|² over mean noise²; NaN where not known.</param>
/// <param name="Parts">The causes, in a fixed order.</param>
/// <param name="Dominating">The cause that costs most; null where nothing costs as much as a thousandth.</param>
/// <param name="Advice">What to change at the bench, the most useful first; empty where nothing would help much.</param>
public sealed record Verdict(
    double PredictedFidelity,
    bool IsUpperBound,
    double PredictedEnhancement,
    double IdealEnhancement,
    double SignalToNoise,
    ImmutableArray<VerdictPart> Parts,
    VerdictPart? Dominating,
    ImmutableArray<string> Advice)
{
    // Losses below this are not worth a change of the bench.
    private const double WorthMentioning = 0.002;
    private const double WorthDominating = 0.001;

    /// <summary>Judges a matrix.</summary>
    public static Verdict Of(TransmissionMatrixFacts facts)
    {
        ErrorBudget budget = facts.Quality.Budget;
        ImmutableArray<VerdictPart> parts =
        [
            new("shot and read noise", budget.Noise, "more light or longer exposures, more steps a mode, or a stronger reference up to where the camera is nearly full"),
            new("drift left", budget.Drift, "more trackers, faster frames, a bench better shielded from air and vibration"),
            new("decorrelation", budget.Decorrelation, "a faster measurement or fewer modes, or a sample at rest"),
            new("step errors left", budget.Steps, "a calibration of the modulator's phase, and four steps or more"),
            new("saturation", budget.Saturation, "a shorter exposure or less light"),
            new("lost patterns", budget.Excluded, "the lost patterns recorded again"),
        ];
        ImmutableArray<VerdictPart> worst = [.. parts.Where(p => p.Loss > WorthDominating).OrderByDescending(p => p.Loss)];
        double modes = facts.Quality.ValidModes;
        return new Verdict(
            budget.Fidelity,
            budget.IsUpperBound,
            Enhancement(modes, budget.Fidelity),
            Enhancement(modes, 1),
            facts.Quality.SignalToNoise,
            parts,
            worst.IsEmpty ? null : worst[0],
            [.. worst.Where(p => p.Loss > WorthMentioning).Select(p => FormattableString.Invariant($"Against {p.Name} ({100 * p.Loss:F1} %): {p.Remedy}."))]);
    }

    private static double Enhancement(double modes, double fidelity) => 1 + (Math.PI / 4 * (modes - 1) * fidelity);
}
