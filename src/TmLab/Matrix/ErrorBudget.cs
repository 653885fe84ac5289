namespace TmLab.Matrix;

/// <summary>
/// What fidelity to the matrix at the start of the measurement is expected to be lost to, each cause alone: 1 − fidelity, 0 … 1.
/// NaN where it cannot be known. Fidelity is the mean over valid rows of |⟨a,b⟩|²/(⟨a,a⟩⟨b,b⟩). Immutable.
/// </summary>
/// <param name="Noise">Shot and read noise of the camera, and whatever else makes a frame scatter about its fit.</param>
/// <param name="Drift">Phase drift that is left after its removal.</param>
/// <param name="Decorrelation">Change of the sample while it was measured.</param>
/// <param name="Steps">Errors of the phase steps that are left after their removal.</param>
/// <param name="Saturation">Clipped counts in rows that are still valid; an upper estimate.</param>
/// <param name="Excluded">Patterns that were lost.</param>
/// <param name="Fidelity">The predicted fidelity, all causes together; those that cannot be known are left out.</param>
public sealed record ErrorBudget(
    double Noise, double Drift, double Decorrelation, double Steps, double Saturation, double Excluded, double Fidelity)
{
    /// <summary>Nothing is known.</summary>
    public static ErrorBudget Unknown { get; } =
        new(double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN);

    /// <summary>Whether a cause is not known, so that the fidelity can only be lower than predicted.</summary>
    public bool IsUpperBound => double.IsNaN(Noise + Drift + Decorrelation + Steps + Saturation + Excluded);
}
