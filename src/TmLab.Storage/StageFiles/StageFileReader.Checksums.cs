using System.Globalization;
using System.IO.Hashing;
using PureHDF;
using PureHDF.VOL.Native;
using TmLab.Failures;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <content>Comparing the large datasets with their stored checksums.</content>
internal sealed partial class StageFileReader
{
    /// <summary>Requires a large dataset to stand at a place.</summary>
    /// <exception cref="BadInputException">It stands elsewhere.</exception>
    public void RequirePlace(string path, long offset)
    {
        long? found = Guard(path, () => ContiguousPlace.FindOurs(Dataset(path), _stream));
        if (found != offset)
        {
            throw DamagedFiles.Damaged(Path, path, $"stands at byte {found?.ToString(CultureInfo.InvariantCulture) ?? "?"}, not {offset}");
        }
    }

    /// <summary>Compares the first and the last block of a large dataset with their stored checksums.</summary>
    /// <exception cref="BadInputException">They differ.</exception>
    public void VerifyEnds(string path)
    {
        StoredChecksums stored = Checksums(path) ?? throw DamagedFiles.Damaged(Path, path, "is not one run of bytes");
        byte[] buffer = new byte[BufferBytes(stored)];
        VerifyBlock(stored, 0, buffer);
        VerifyBlock(stored, stored.Values.Length - 1, buffer);
    }

    /// <summary>Compares all large datasets with their stored checksums.</summary>
    /// <exception cref="BadInputException">A block differs; names the dataset and the block.</exception>
    public void Verify(IEnumerable<string> datasets, IProgress<StageProgress>? progress, CancellationToken cancel)
    {
        foreach (StoredChecksums stored in datasets.Where(p => Has(StageFileWriter.ChecksumGroup + p)).Select(Checksums).OfType<StoredChecksums>())
        {
            byte[] buffer = new byte[BufferBytes(stored)];
            for (int block = 0; block < stored.Values.Length; block++)
            {
                cancel.ThrowIfCancellationRequested();
                VerifyBlock(stored, block, buffer);
                progress?.Report(new StageProgress("checking " + stored.Dataset, block + 1, stored.Values.Length, "blocks"));
            }
        }
    }

    private static int BufferBytes(StoredChecksums stored) => (int)Math.Min(stored.BlockBytes, stored.ByteCount);

    // Null where another program has stored the dataset in pieces or its numbers in another order: the checksums are of our bytes.
    private StoredChecksums? Checksums(string path)
    {
        string name = StageFileWriter.ChecksumGroup + path;
        int blockBytes = Attribute<int>(name, "block_bytes");
        uint[] values = ReadArray<uint>(name, -1);
        (long bytes, long? offset) = Guard(path, () => OurBytes(path));
        if (offset is null)
        {
            return null;
        }

        if (blockBytes < 1 || values.Length != ((bytes - 1) / blockBytes) + 1)
        {
            throw DamagedFiles.Damaged(Path, name, $"does not fit {path}");
        }

        return new StoredChecksums(path, offset.Value, bytes, blockBytes, values);
    }

    private (long Count, long? Offset) OurBytes(string path)
    {
        NativeDataset dataset = Numbers(path);
        long bytes = RequireStored(path, dataset, dataset.Type.Size);
        bool swapped = dataset.Type.Class == H5DataTypeClass.Compound
            && ElementTypes.RequireAndTellSwapped<Complex64>(Path, path, dataset.Type);
        return (bytes, swapped ? null : ContiguousPlace.FindOurs(dataset, _stream));
    }

    private void VerifyBlock(StoredChecksums stored, int block, byte[] buffer)
    {
        long start = (long)block * stored.BlockBytes;
        Span<byte> bytes = buffer.AsSpan(0, (int)Math.Min(buffer.Length, stored.ByteCount - start));
        new ContiguousBlocks<byte>(_file, Path, stored.Dataset, stored.Offset, 1, stored.ByteCount, swapped: false)
            .Read(0, 1, start, bytes.Length, bytes);
        if (Crc32.HashToUInt32(bytes) != stored.Values[block])
        {
            throw DamagedFiles.Damaged(
                Path, stored.Dataset, $"is damaged between bytes {stored.Offset + start} and {stored.Offset + start + bytes.Length} of the file");
        }
    }

    private sealed record StoredChecksums(string Dataset, long Offset, long ByteCount, int BlockBytes, uint[] Values);
}
