namespace TmLab.Numerics.Statistics;

/// <summary>
/// The counter-based generator Philox4x32-10 (Salmon, Moraes, Dror and Shaw, "Parallel random numbers: as easy as 1, 2, 3",
/// Proc. SC11 (2011), doi:10.1145/2063384.2063405): a keyed bijection of 128-bit counters, so that any block of numbers can be had
/// on any thread without those before it.
/// </summary>
public static class Philox
{
    private const int Rounds = 10;
    private const uint Multiplier0 = 0xD2511F53;
    private const uint Multiplier1 = 0xCD9E8D57;
    private const uint Weyl0 = 0x9E3779B9;
    private const uint Weyl1 = 0xBB67AE85;

    /// <summary>The four 32-bit numbers that stand at a counter under a key.</summary>
    public static PhiloxBlock At(PhiloxBlock counter, uint key0, uint key1)
    {
        (uint x0, uint x1, uint x2, uint x3) = (counter.X0, counter.X1, counter.X2, counter.X3);
        for (int round = 0; round < Rounds; round++)
        {
            ulong product0 = (ulong)Multiplier0 * x0, product1 = (ulong)Multiplier1 * x2;
            (x0, x1, x2, x3) = (
                (uint)(product1 >> 32) ^ x1 ^ key0, (uint)product1, (uint)(product0 >> 32) ^ x3 ^ key1, (uint)product0);
            key0 += Weyl0;
            key1 += Weyl1;
        }

        return new PhiloxBlock(x0, x1, x2, x3);
    }
}

/// <summary>Four 32-bit words: a counter or what stands there.</summary>
public readonly record struct PhiloxBlock(uint X0, uint X1, uint X2, uint X3);
