using System.Collections.Immutable;
using System.Numerics;

namespace TmLab.Shaping;

/// <summary>
/// The phases that make all modes arrive in step at the targets: arg Σ_t w_t conj(T[t, n]) / √(Σ|T[t, ·]|²). With one target this
/// is the best phase-only mask (Vellekoop &amp; Mosk, Opt. Lett. 32, 2309 (2007)); with M targets each gets about (π/4) N / M + 1.
/// Rows are taken at unit energy, so that a target's brightness does not decide its share.
/// </summary>
public static class PhaseConjugation
{
    /// <summary>One phase a mode, radians in (−π, π].</summary>
    public static ImmutableArray<double> Phases(ImmutableArray<TargetRow> targets)
    {
        var field = new Complex[targets[0].Elements.Length];
        foreach (TargetRow target in targets)
        {
            double factor = target.Target.Weight / Math.Sqrt(target.Energy);
            for (int n = 0; n < field.Length; n++)
            {
                field[n] += factor * Complex.Conjugate(target.Elements[n]);
            }
        }

        return [.. field.Select(f => f.Phase)];
    }
}
