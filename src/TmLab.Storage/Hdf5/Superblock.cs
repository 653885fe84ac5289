using System.Buffers.Binary;
using Microsoft.Win32.SafeHandles;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// The first bytes of an HDF5 file, as far as needed to tell one from any other file and to notice one that was cut off
/// (The HDF Group, HDF5 File Format Specification 3.0, section II.A).
/// </summary>
internal static class Superblock
{
    private const int LargestUserBlock = 1 << 20;
    private static readonly byte[] s_signature = [0x89, (byte)'H', (byte)'D', (byte)'F', 0x0D, 0x0A, 0x1A, 0x0A];

    /// <summary>Where the file says that it ends, bytes; null when it is no HDF5 file or uses addresses of other than 8 bytes.</summary>
    public static (bool IsHdf5, long? EndOfFile) Read(SafeFileHandle file)
    {
        Span<byte> head = stackalloc byte[64];
        for (long start = 0; start <= LargestUserBlock; start = start == 0 ? 512 : start * 2)
        {
            int count = RandomAccess.Read(file, head, start);
            if (count >= s_signature.Length && head[..s_signature.Length].SequenceEqual(s_signature))
            {
                return (true, EndOfFile(head[..count]));
            }
        }

        return (false, null);
    }

    private static long? EndOfFile(ReadOnlySpan<byte> head)
    {
        if (head.Length < 9)
        {
            return long.MaxValue;
        }

        (int sizeAt, int endAt) = head[8] switch
        {
            0 => (13, 40),
            1 => (13, 44),
            2 or 3 => (9, 28),
            _ => (-1, -1),
        };
        if (endAt < 0)
        {
            return null;
        }

        // A head too short to hold the address belongs to a file that ends before it should.
        if (head.Length < endAt + sizeof(long))
        {
            return long.MaxValue;
        }

        return head[sizeAt] == sizeof(long) ? BinaryPrimitives.ReadInt64LittleEndian(head[endAt..]) : null;
    }
}
