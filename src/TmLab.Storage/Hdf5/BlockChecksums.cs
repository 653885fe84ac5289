using System.IO.Hashing;
using TmLab.Numerics;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// CRC-32 (IEEE 802.3) of each block of a large dataset, gathered while its pieces are written in any order and from several
/// threads, without reading anything back. Also knows whether every byte was written exactly once.
/// </summary>
internal sealed class BlockChecksums
{
    /// <summary>Bytes a block, the last one excepted.</summary>
    public const int DefaultBlockBytes = 1 << 20;

    private readonly uint[] _crc;
    private readonly int[] _written;
    private readonly long _totalBytes;

    /// <summary>Prepares for a dataset of <paramref name="totalBytes"/> bytes.</summary>
    public BlockChecksums(long totalBytes, int blockBytes = DefaultBlockBytes)
    {
        Preconditions.InRange(totalBytes, 0, long.MaxValue);
        Preconditions.InRange(blockBytes, 1, 1 << 30);
        _totalBytes = totalBytes;
        BlockBytes = blockBytes;
        long blocks = (totalBytes + blockBytes - 1) / blockBytes;
        _crc = new uint[blocks];
        _written = new int[blocks];
    }

    /// <summary>Bytes a block, the last one excepted.</summary>
    public int BlockBytes { get; }

    /// <summary>The checksum of each block, once all is written.</summary>
    public uint[] Values => [.. _crc];

    /// <summary>The first block that has not been written exactly once, −1 when there is none.</summary>
    public int FirstIncompleteBlock
    {
        get
        {
            for (int block = 0; block < _crc.Length; block++)
            {
                if (Volatile.Read(ref _written[block]) != LengthOf(block))
                {
                    return block;
                }
            }

            return -1;
        }
    }

    /// <summary>Takes bytes that stand at <paramref name="offset"/> in the dataset.</summary>
    public void Add(long offset, ReadOnlySpan<byte> bytes)
    {
        Preconditions.InRange(offset, 0, _totalBytes - bytes.Length);
        while (!bytes.IsEmpty)
        {
            int block = (int)(offset / BlockBytes);
            int start = (int)(offset % BlockBytes);
            int count = Math.Min(bytes.Length, LengthOf(block) - start);
            uint part = CrcCombination.Shift(Crc32.HashToUInt32(bytes[..count]), LengthOf(block) - start - count);
            ExclusiveOr(ref _crc[block], part);
            Interlocked.Add(ref _written[block], count);
            bytes = bytes[count..];
            offset += count;
        }
    }

    private static void ExclusiveOr(ref uint target, uint value)
    {
        uint seen = Volatile.Read(ref target);
        while (true)
        {
            uint before = Interlocked.CompareExchange(ref target, seen ^ value, seen);
            if (before == seen)
            {
                return;
            }

            seen = before;
        }
    }

    private int LengthOf(int block) => (int)Math.Min(BlockBytes, _totalBytes - ((long)block * BlockBytes));
}
