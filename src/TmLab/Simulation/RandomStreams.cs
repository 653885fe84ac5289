using TmLab.Numerics.Statistics;

namespace TmLab.Simulation;

/// <summary>What a random number is for; every purpose has streams of its own, so that switching one effect on leaves the others as they were.</summary>
internal enum RandomPurpose
{
    Medium,
    SlabBasis,
    Reference,
    PixelGain,
    PixelOffset,
    DefectivePixel,
    CameraNoise,
    PhaseWalk,
    PowerWalk,
    PowerNoise,
    StepJitter,
}

/// <summary>
/// Seeded random numbers addressed by purpose, item and index (for instance camera noise, frame, pixel) instead of by order.
/// Immutable, and safe to use from several threads.
/// </summary>
internal readonly struct RandomStreams(ulong seed)
{
    private const double TwoToMinus32 = 1.0 / 4294967296.0;
    private const double TwoToMinus53 = 1.0 / 9007199254740992.0;

    private readonly uint _key0 = (uint)seed;
    private readonly uint _key1 = (uint)(seed >> 32);

    /// <summary>The four words at an address. Variant tells apart independent realisations of the same thing.</summary>
    public PhiloxBlock Block(RandomPurpose purpose, int item, int index, int variant = 0) =>
        Philox.At(new PhiloxBlock((uint)index, (uint)item, (uint)purpose, (uint)variant), _key0, _key1);

    /// <summary>A number uniform on [0, 1), 53 bits.</summary>
    public double Uniform(RandomPurpose purpose, int item, int index, int variant = 0) =>
        UniformFromWords(Block(purpose, item, index, variant));

    /// <summary>A standard normal number.</summary>
    public double Normal(RandomPurpose purpose, int item, int index, int variant = 0) =>
        NormalFromWords(Block(purpose, item, index, variant));

    /// <summary>A circular complex normal number z with E|z|² = 1.</summary>
    public (double Real, double Imaginary) ComplexNormal(RandomPurpose purpose, int item, int index, int variant = 0) =>
        ComplexNormalFromWords(Block(purpose, item, index, variant));

    /// <summary>Uniform on [0, 1) from words 0 and 1.</summary>
    public static double UniformFromWords(in PhiloxBlock block) =>
        ((((ulong)block.X0 << 32) | block.X1) >> 11) * TwoToMinus53;

    /// <summary>
    /// Standard normal from words 2 and 3 (independent of <see cref="UniformFromWords"/> of the same block) by the transform of
    /// Box and Muller, Ann. Math. Stat. 29, 610 (1958). With a 32-bit uniform number the tail ends at 6.66 standard deviations.
    /// </summary>
    public static double NormalFromWords(in PhiloxBlock block)
    {
        double radius = Math.Sqrt(-2 * PortableMath.Log((block.X2 + 1.0) * TwoToMinus32));
        return radius * PortableMath.CosTurns(block.X3 * TwoToMinus32);
    }

    /// <summary>Box and Muller's pair as the two parts of a circular complex normal number: |z|² = −ln u is exponential, the phase uniform.</summary>
    public static (double Real, double Imaginary) ComplexNormalFromWords(in PhiloxBlock block)
    {
        double radius = Math.Sqrt(-PortableMath.Log((block.X2 + 1.0) * TwoToMinus32));
        (double sin, double cos) = PortableMath.SinCosTurns(block.X3 * TwoToMinus32);
        return (radius * cos, radius * sin);
    }
}
