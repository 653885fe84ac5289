namespace TmLab.Planning;

/// <summary>What a plan expects of the bench beyond what a measurement's manifest says. Immutable.</summary>
/// <param name="SignalElectrons">Mean signal without reference, photoelectrons a pixel a frame, all macro-pixels on.</param>
/// <param name="ReferenceElectrons">Mean reference, photoelectrons a pixel a frame.</param>
/// <param name="FullWellElectrons">Photoelectrons at which a pixel is full.</param>
/// <param name="OffsetCounts">Counts in darkness.</param>
/// <param name="DriftRadPerSqrtSecond">Random walk of the phase, radians r.m.s. in one second.</param>
/// <param name="DecorrelationTimeS">The sample's decorrelation time, seconds; infinite for a sample at rest.</param>
public sealed record PlanExpectations(
    double SignalElectrons,
    double ReferenceElectrons,
    double FullWellElectrons,
    double OffsetCounts,
    double DriftRadPerSqrtSecond,
    double DecorrelationTimeS)
{
    /// <summary>Those of a plan.</summary>
    public static PlanExpectations Of(PlanSettings settings) => new(
        settings.SignalElectrons,
        settings.ReferenceElectrons,
        settings.Camera.FullWellElectrons,
        settings.Camera.OffsetCounts,
        settings.DriftRadPerSqrtSecond,
        settings.DecorrelationTimeS);
}
