using System.Buffers.Binary;
using Microsoft.Win32.SafeHandles;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// Tells the byte order of stored numbers. The HDF5 library does not say; it refuses plain numbers whose most significant byte comes
/// first, but hands out the members of complex numbers as they stand. So the datatype message is looked for in the bytes that the
/// library reads while it opens a dataset.
/// </summary>
internal static class ByteOrder
{
    private const int MessageHeadBytes = 8;
    private const int MostHeaderBytes = 1 << 20;
    private const int FixedPointClass = 0;
    private const int FloatingPointClass = 1;

    /// <summary>Whether the header holds a number type with the most significant byte first.</summary>
    /// <param name="file">The file.</param>
    /// <param name="transfers">What the library read while it opened the dataset.</param>
    public static bool IsBigEndian(SafeFileHandle file, IReadOnlyList<(long Position, int Length)> transfers)
    {
        foreach ((long start, long length) in Runs(transfers))
        {
            byte[] bytes = new byte[Math.Min(length, MostHeaderBytes)];
            int count = RandomAccess.Read(file, bytes, start);
            for (int at = 0; at + MessageHeadBytes + 4 <= count; at++)
            {
                if (IsBigEndianNumber(bytes.AsSpan(at)))
                {
                    return true;
                }
            }
        }

        return false;
    }

    // Datatype message (HDF5 File Format Specification 3.0, section IV.A.2.d): version and class, 24 class bits of which bit 0 is
    // the byte order, uint32 size; then uint16 bit offset and uint16 precision, which for common numbers are 0 and 8 · size.
    private static bool IsBigEndianNumber(ReadOnlySpan<byte> message)
    {
        int version = message[0] >> 4;
        int numberClass = message[0] & 0xF;
        uint size = BinaryPrimitives.ReadUInt32LittleEndian(message[4..]);
        bool isNumber = version is >= 1 and <= 4
            && numberClass is FixedPointClass or FloatingPointClass
            && size is 2 or 4 or 8
            && BinaryPrimitives.ReadUInt16LittleEndian(message[MessageHeadBytes..]) == 0
            && BinaryPrimitives.ReadUInt16LittleEndian(message[(MessageHeadBytes + 2)..]) == 8 * size
            && message[3] == 0
            && message[2] == (numberClass == FloatingPointClass ? (8 * size) - 1 : 0);
        return isNumber && (message[1] & 1) == 1;
    }

    private static List<(long Start, long Length)> Runs(IReadOnlyList<(long Position, int Length)> transfers)
    {
        var runs = new List<(long Start, long Length)>();
        foreach ((long position, int length) in transfers.Order())
        {
            if (runs is [.., (long start, long covered)] && position <= start + covered)
            {
                runs[^1] = (start, Math.Max(covered, position + length - start));
            }
            else
            {
                runs.Add((position, length));
            }
        }

        return runs;
    }
}
