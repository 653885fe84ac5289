namespace TmLab.Simulation;

/// <summary>
/// The counter-based generator Philox4x32-10: a keyed bijection of 128-bit counters whose outputs are the random numbers. Any
/// number of the sequence is had at once, so results do not depend on the order or the thread in which they are asked for.
/// Source: J. K. Salmon, M. A. Moraes, R. O. Dror, D. E. Shaw, "Parallel random numbers: as easy as 1, 2, 3", SC'11 (2011).
/// </summary>
internal static class Philox4x32
{
    private const int Rounds = 10;
    private const uint Multiplier0 = 0xD2511F53;
    private const uint Multiplier1 = 0xCD9E8D57;
    private const uint Weyl0 = 0x9E3779B9;
    private const uint Weyl1 = 0xBB67AE85;

    /// <summary>The block of four random words that belongs to a counter and a key.</summary>
    public static RandomBlock Block(uint c0, uint c1, uint c2, uint c3, uint key0, uint key1)
    {
        for (int round = 0; round < Rounds; round++)
        {
            ulong product0 = (ulong)Multiplier0 * c0;
            ulong product1 = (ulong)Multiplier1 * c2;
            c0 = (uint)(product1 >> 32) ^ c1 ^ key0;
            c2 = (uint)(product0 >> 32) ^ c3 ^ key1;
            c1 = (uint)product1;
            c3 = (uint)product0;
            key0 += Weyl0;
            key1 += Weyl1;
        }

        return new RandomBlock(c0, c1, c2, c3);
    }
}

/// <summary>Four random 32-bit words.</summary>
internal readonly record struct RandomBlock(uint W0, uint W1, uint W2, uint W3);
