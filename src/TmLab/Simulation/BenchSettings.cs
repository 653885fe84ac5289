using System.Collections.Immutable;

namespace TmLab.Simulation;

/// <summary>Everything about a simulated bench that the measurement's manifest and schedule do not say. Immutable.</summary>
public sealed record BenchSettings
{
    /// <summary>Seed of all random numbers; equal settings, manifest and schedule give equal frames.</summary>
    public ulong Seed { get; init; } = 1;

    /// <summary>The sample.</summary>
    public Medium Medium { get; init; } = new IndependentGaussian();

    /// <summary>Share of the mean signal intensity that passes the sample unscattered, 0 … 1.</summary>
    public double BallisticFraction { get; init; }

    /// <summary>Grain of the speckle on the camera.</summary>
    public SpeckleGrain Grain { get; init; } = SpeckleGrain.IndependentPixels;

    /// <summary>
    /// Mean signal (without reference), photoelectrons a pixel a frame, with all macro-pixels on at random phases. Patterns that
    /// switch macro-pixels off have less.
    /// </summary>
    public double MeanSignalElectrons { get; init; } = 1000;

    /// <summary>The reference beam.</summary>
    public ReferenceBeam Reference { get; init; } = new();

    /// <summary>The camera.</summary>
    public SimulatedCamera Camera { get; init; } = new();

    /// <summary>The causes of phase drift, which add up; empty for none.</summary>
    public ImmutableArray<PhaseDrift> PhaseDrift { get; init; } = [];

    /// <summary>The laser's power.</summary>
    public PowerDrift Power { get; init; } = new();

    /// <summary>
    /// The sample's decorrelation time τ, seconds; infinite for a sample at rest. The matrix moves as
    /// T(t) = e^{−t/τ} T₀ + √(1 − e^{−2t/τ}) T₁ with T₁ independent, so the field correlation with the start is e^{−t/τ}.
    /// Unscattered light stays.
    /// </summary>
    public double DecorrelationTimeS { get; init; } = double.PositiveInfinity;

    /// <summary>How the phase steps differ from those commanded.</summary>
    public StepError Steps { get; init; } = new();

    /// <summary>Faults of single frames, applied in order; empty for none.</summary>
    public ImmutableArray<FrameFault> Faults { get; init; } = [];

    /// <summary>Light from elsewhere; null for none.</summary>
    public StrayLight? Stray { get; init; }
}
