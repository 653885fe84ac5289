namespace TmLab.Simulation;

/// <summary>
/// A camera of the linear model of EMVA standard 1288 (release 3.1 / 4.0 linear): photoelectrons with Poisson noise, read noise in
/// electrons, a conversion gain, an offset, rounding and clipping to the bit depth. Light levels on the bench are in photoelectrons
/// already, so the quantum efficiency does not appear. Frame size and bit depth come from the measurement's manifest.
/// </summary>
public sealed record SimulatedCamera
{
    /// <summary>Photoelectrons a count, 1/K of the standard; &gt; 0.</summary>
    public double ElectronsPerCount { get; init; } = 7.5;

    /// <summary>Counts in darkness.</summary>
    public double OffsetCounts { get; init; } = 64;

    /// <summary>Read noise σ_d, photoelectrons r.m.s.</summary>
    public double ReadNoiseElectrons { get; init; } = 1.6;

    /// <summary>Photoelectrons at which a pixel is full.</summary>
    public double FullWellElectrons { get; init; } = 30_000;

    /// <summary>Photo-response non-uniformity: relative r.m.s. spread of the pixels' sensitivity.</summary>
    public double PrnuRelative { get; init; } = 0.004;

    /// <summary>Dark-signal non-uniformity: r.m.s. spread of the pixels' offset, photoelectrons.</summary>
    public double DsnuElectrons { get; init; } = 0.5;

    /// <summary>Whether photoelectrons arrive at random; without, the light's mean is what is read.</summary>
    public bool HasShotNoise { get; init; } = true;

    /// <summary>Number of pixels that see no light, at places drawn from the seed.</summary>
    public int DeadPixelCount { get; init; }

    /// <summary>Number of pixels that stand at full scale in every frame, at places drawn from the seed.</summary>
    public int HotPixelCount { get; init; }
}
