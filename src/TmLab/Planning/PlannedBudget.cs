namespace TmLab.Planning;

/// <summary>
/// What a planned measurement should be worth: predicted fidelity to the sample's matrix at the first frame and the parts that it
/// is made of. Parts of the noise are noise energy over signal energy of a row. Immutable.
/// </summary>
/// <param name="ShotNoise">Of the photoelectrons of reference and signal.</param>
/// <param name="ReadNoise">Of the camera's electronics.</param>
/// <param name="CountRounding">Of rounding to whole counts, 1/12 count².</param>
/// <param name="DriftVarianceRad2">Mean variance of the phase of a mode that is left when the drift has been removed, rad².</param>
/// <param name="PhaseErrorGain">Error energy of the matrix for unit phase variance of every mode: 1 for complete bases of modulus 1.</param>
/// <param name="FieldCorrelation">Mean over the modes of the sample's field correlation between the first frame and the mode's time, 0 … 1.</param>
/// <param name="PanelEfficiency">|mean e^{iε}|² of the panel's rounding errors ε, 0 … 1.</param>
/// <param name="SaturatedShare">Share of pixels that saturate in a frame of full signal.</param>
/// <param name="TrackerGapRad">Four standard deviations of the phase from one tracker to the next, radians; of the whole measurement without trackers.</param>
/// <param name="ModeCount">Number of input modes.</param>
public sealed record PlannedBudget(
    double ShotNoise,
    double ReadNoise,
    double CountRounding,
    double DriftVarianceRad2,
    double PhaseErrorGain,
    double FieldCorrelation,
    double PanelEfficiency,
    double SaturatedShare,
    double TrackerGapRad,
    int ModeCount)
{
    /// <summary>Signal over noise of an element, in energy.</summary>
    public double SignalToNoise => 1 / (ShotNoise + ReadNoise + CountRounding);

    /// <summary>Fidelity if only noise were there: SNR/(1 + SNR).</summary>
    public double NoiseFidelity => 1 / (1 + ShotNoise + ReadNoise + CountRounding);

    /// <summary>Fidelity if only the drift were there: |⟨e^{iε}⟩|² = e^{−var}.</summary>
    public double DriftFidelity => Math.Exp(-DriftVarianceRad2 * PhaseErrorGain);

    /// <summary>Fidelity if only the decorrelation were there: the squared mean field correlation.</summary>
    public double DecorrelationFidelity => FieldCorrelation * FieldCorrelation;

    /// <summary>Predicted fidelity |⟨a,b⟩|²/(⟨a,a⟩⟨b,b⟩), mean over the rows, 0 … 1.</summary>
    public double Fidelity => NoiseFidelity * DriftFidelity * DecorrelationFidelity * PanelEfficiency;

    /// <summary>Predicted enhancement of one focus by phase control: 1 + (π/4)(N − 1) F (Vellekoop and Mosk, Opt. Lett. 32, 2309 (2007)).</summary>
    public double Enhancement => 1 + (Math.PI / 4 * (ModeCount - 1) * Fidelity);
}
