namespace TmLab.Cli.Stages;

/// <summary>What may be required of a matrix.</summary>
internal enum RequiredQuantity
{
    /// <summary>The predicted fidelity, 0 … 1.</summary>
    Fidelity,

    /// <summary>The predicted enhancement of one focus.</summary>
    Enhancement,

    /// <summary>The signal-to-noise ratio.</summary>
    Snr,
}

/// <summary>A quantity that must reach a value.</summary>
internal sealed record Requirement(RequiredQuantity Quantity, double AtLeast);
