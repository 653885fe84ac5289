using System.Collections.Immutable;

namespace TmLab.Matrix;

/// <summary>
/// How the sample changed while it was measured: the overlap of each tracker with the first, noise taken off, and the law
/// e^{−2t/τ} fitted to it, τ being the time in which the correlation of the field falls to 1/e. Immutable.
/// </summary>
/// <param name="Overlap">|⟨D_0, D_k⟩|²/(⟨D_0,D_0⟩⟨D_k,D_k⟩) of each tracker, the noise' share of the energies taken off; NaN where it is not known.</param>
/// <param name="TimeConstantS">τ, seconds; NaN when no change is significant or there are too few trackers.</param>
/// <param name="TimeConstantSdS">Its standard deviation, seconds.</param>
/// <param name="EnhancementFactor">
/// By what the enhancement of a focus is multiplied because the matrix is a mean over the measurement: |mean correlation with the
/// start|²; 1 when no change is significant.
/// </param>
public sealed record DecorrelationFacts(
    ImmutableArray<double> Overlap, double TimeConstantS, double TimeConstantSdS, double EnhancementFactor)
{
    /// <summary>Nothing looked for.</summary>
    public static DecorrelationFacts Unknown { get; } = new([], double.NaN, double.NaN, double.NaN);
}
