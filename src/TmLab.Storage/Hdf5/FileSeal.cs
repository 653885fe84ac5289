using System.Buffers.Binary;
using System.Collections.Immutable;
using System.IO.Hashing;
using Microsoft.Win32.SafeHandles;
using TmLab.Failures;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// A few bytes behind the end of our HDF5 files, which HDF5 readers ignore, with a CRC-32 of everything but the large datasets (which
/// have checksums of their own). It is checked before the HDF5 library sees a file, so that damage to headers is reported and not
/// interpreted. Layout, little-endian: regions n × (int64 offset, int64 length), uint32 n, uint32 CRC of all bytes outside the
/// regions up to here, int64 length of the file with the seal, 8 bytes "TMLSEAL1". A file rewritten by another program has no seal
/// and is read without.
/// </summary>
internal static class FileSeal
{
    private const int TailBytes = 24;
    private const int RegionBytes = 16;
    private const int MostRegions = 64;
    private const int BufferBytes = 1 << 20;
    private static ReadOnlySpan<byte> Magic => "TMLSEAL1"u8;

    /// <summary>Appends the seal to a finished file.</summary>
    /// <param name="file">The file, open for reading and writing.</param>
    /// <param name="regions">The large datasets' bytes, rising, not overlapping.</param>
    public static void Append(SafeFileHandle file, ImmutableArray<(long Offset, long Length)> regions)
    {
        long end = RandomAccess.GetLength(file);
        byte[] seal = new byte[(regions.Length * RegionBytes) + TailBytes];
        for (int k = 0; k < regions.Length; k++)
        {
            BinaryPrimitives.WriteInt64LittleEndian(seal.AsSpan(k * RegionBytes), regions[k].Offset);
            BinaryPrimitives.WriteInt64LittleEndian(seal.AsSpan((k * RegionBytes) + 8), regions[k].Length);
        }

        Span<byte> tail = seal.AsSpan(regions.Length * RegionBytes);
        BinaryPrimitives.WriteInt32LittleEndian(tail, regions.Length);
        BinaryPrimitives.WriteUInt32LittleEndian(tail[4..], Checksum(file, regions, end, seal.AsSpan(0, seal.Length - TailBytes + 4)));
        BinaryPrimitives.WriteInt64LittleEndian(tail[8..], end + seal.Length);
        Magic.CopyTo(tail[16..]);
        RandomAccess.Write(file, seal, end);
    }

    /// <summary>Checks a file's seal. Returns its checksum, or null when the file has none.</summary>
    /// <exception cref="BadInputException">The seal does not fit the file.</exception>
    public static uint? Check(SafeFileHandle file, string path)
    {
        long length = RandomAccess.GetLength(file);
        Span<byte> tail = stackalloc byte[TailBytes];
        if (length < TailBytes || RandomAccess.Read(file, tail, length - TailBytes) < TailBytes || !tail[16..].SequenceEqual(Magic))
        {
            return null;
        }

        int count = BinaryPrimitives.ReadInt32LittleEndian(tail);
        long sealBytes = TailBytes + ((long)count * RegionBytes);
        if (BinaryPrimitives.ReadInt64LittleEndian(tail[8..]) != length || count is < 0 or > MostRegions || sealBytes > length)
        {
            throw DamagedFiles.Damaged(path, null, "is damaged (its seal does not fit its length)");
        }

        byte[] seal = new byte[sealBytes];
        _ = RandomAccess.Read(file, seal, length - sealBytes);
        uint expected = BinaryPrimitives.ReadUInt32LittleEndian(tail[4..]);
        if (Regions(seal, count, length - sealBytes) is not { } regions
            || Checksum(file, regions, length - sealBytes, seal.AsSpan(0, seal.Length - TailBytes + 4)) != expected)
        {
            throw DamagedFiles.Damaged(path, null, "is damaged (the checksum of its headers does not match)");
        }

        return expected;
    }

    private static ImmutableArray<(long Offset, long Length)>? Regions(ReadOnlySpan<byte> seal, int count, long end)
    {
        var regions = ImmutableArray.CreateBuilder<(long, long)>(count);
        long reached = 0;
        for (int k = 0; k < count; k++)
        {
            long offset = BinaryPrimitives.ReadInt64LittleEndian(seal[(k * RegionBytes)..]);
            long length = BinaryPrimitives.ReadInt64LittleEndian(seal[((k * RegionBytes) + 8)..]);
            if (offset < reached || length < 0 || length > end - offset)
            {
                return null;
            }

            regions.Add((offset, length));
            reached = offset + length;
        }

        return regions.ToImmutable();
    }

    private static uint Checksum(
        SafeFileHandle file, ImmutableArray<(long Offset, long Length)> regions, long end, ReadOnlySpan<byte> sealHead)
    {
        var crc = new Crc32();
        byte[] buffer = new byte[(int)Math.Min(BufferBytes, end)];
        long position = 0;
        foreach ((long offset, long length) in regions)
        {
            Append(crc, file, position, offset, buffer);
            position = offset + length;
        }

        Append(crc, file, position, end, buffer);
        crc.Append(sealHead);
        return crc.GetCurrentHashAsUInt32();
    }

    private static void Append(Crc32 crc, SafeFileHandle file, long from, long to, byte[] buffer)
    {
        while (from < to)
        {
            int count = RandomAccess.Read(file, buffer.AsSpan(0, (int)Math.Min(buffer.Length, to - from)), from);
            if (count == 0)
            {
                return; // Shorter than it was: the checksum will not match.
            }

            crc.Append(buffer.AsSpan(0, count));
            from += count;
        }
    }
}
