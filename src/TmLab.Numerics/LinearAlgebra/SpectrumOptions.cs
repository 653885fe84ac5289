namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Tuning of the spectra of tall matrices, with the defaults that the program uses. Immutable.</summary>
public sealed record SpectrumOptions
{
    /// <summary>The defaults.</summary>
    public static SpectrumOptions Default { get; } = new();

    /// <summary>Bytes of a tile of rows in single precision; two tiles are held, and in the double-precision routes twice as much besides.</summary>
    public long TileBytes { get; init; } = 32L << 20;

    /// <summary>
    /// The relative error of the smallest singular value asked for that is tolerated; a route whose estimated error is larger is
    /// left for the next, more exact and slower one.
    /// </summary>
    public double RelativeAccuracy { get; init; } = 1e-4;

    /// <summary>Columns that a randomised basis has beyond the channels asked for (p of Halko, Martinsson and Tropp 2011), ≥ 2.</summary>
    public int Oversampling { get; init; } = 10;

    /// <summary>The most passes over the matrix that a randomised search makes, ≥ 2.</summary>
    public int MaximumPasses { get; init; } = 8;

    /// <summary>A randomised search ends when every bound is below this part of its value.</summary>
    public double RandomisedAccuracy { get; init; } = 1e-5;

    /// <summary>
    /// Whether leading channels come from the Gram matrix, exactly, where that costs less arithmetic than
    /// <see cref="MaximumPasses"/> randomised passes.
    /// </summary>
    public bool PreferGramWhenCheaper { get; init; } = true;

    /// <summary>Seed of the random start.</summary>
    public ulong Seed { get; init; } = 20_100_104;
}
