namespace TmLab.Storage.Hdf5;

/// <summary>
/// Puts CRC-32 values of pieces together to that of the whole, in any order of arrival. CRC-32 (IEEE 802.3) is linear over GF(2):
/// crc(A‖B) = crc(A)·x^(8·|B|) mod P, added (exclusive or) to crc(B). Method: M. Adler, crc32_combine of zlib (common practice).
/// </summary>
internal static class CrcCombination
{
    // x³² + x²⁶ + … + 1 with the coefficient of x⁰ in the highest bit, as the checksum itself is written.
    private const uint Polynomial = 0xEDB88320;
    private const uint One = 0x8000_0000;
    private static readonly uint[] s_powers = PowersOfX();

    /// <summary>The contribution to a whole's CRC of a piece with CRC <paramref name="crc"/> behind which <paramref name="bytesBehind"/> bytes follow.</summary>
    public static uint Shift(uint crc, long bytesBehind)
    {
        uint factor = One;
        int power = 3; // x⁸ a byte
        for (long rest = bytesBehind; rest != 0; rest >>= 1, power++)
        {
            if ((rest & 1) != 0)
            {
                factor = Multiply(s_powers[power & 31], factor);
            }
        }

        return Multiply(factor, crc);
    }

    // s_powers[n] = x^(2ⁿ) mod P; the order of x divides 2³² − 1, so that n may be taken modulo 32.
    private static uint[] PowersOfX()
    {
        var powers = new uint[32];
        powers[0] = One >> 1;
        for (int n = 1; n < powers.Length; n++)
        {
            powers[n] = Multiply(powers[n - 1], powers[n - 1]);
        }

        return powers;
    }

    private static uint Multiply(uint a, uint b)
    {
        uint product = 0;
        for (uint bit = One; bit != 0; bit >>= 1)
        {
            if ((a & bit) != 0)
            {
                product ^= b;
            }

            b = (b & 1) != 0 ? (b >> 1) ^ Polynomial : b >> 1;
        }

        return product;
    }
}
