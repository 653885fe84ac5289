using System.Buffers.Binary;
using System.Numerics;
using System.Runtime.InteropServices;
using PureHDF;
using PureHDF.Selections;
using PureHDF.VOL.Native;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;

namespace TmLab.Storage.Frames;

/// <summary>
/// A dataset (frame, y, x) of any integer type. Frames are read in blocks, a whole number of chunks deep where that stays within
/// bounds, because each chunk is decompressed as a whole.
/// </summary>
internal sealed class Hdf5FrameSource : IFrameSource
{
    private const long BlockBytes = 8 << 20;
    private const long LargestBlockBytes = 128 << 20;
    private const ulong LargestCacheBytes = 256 << 20;
    private const long LargestChunkBytes = 1L << 30;

    private readonly NativeFile _file;
    private readonly NativeDataset _dataset;
    private readonly string _name;
    private readonly string _path;
    private readonly Func<int, int, ushort[]> _readBlock;
    private readonly int _blockFrames;
    private readonly H5DatasetAccess _access;
    private ushort[] _block = [];
    private int _blockStart;
    private bool? _isBigEndian;
    private int _next;

    public Hdf5FrameSource(string path, string name, string dataset)
    {
        _name = name;
        _path = dataset;
        _file = Hdf5Opening.Open(path, name);
        try
        {
            _dataset = Hdf5Opening.Dataset(_file, name, dataset);
            (FrameCount, FrameSize) = Shape(Hdf5Opening.Guarded(name, dataset, () => _dataset.Space.Dimensions));
            _readBlock = ReaderFor(_dataset.Type);
            _blockFrames = BlockFrames();
            _access = new H5DatasetAccess { ChunkCache = CacheForBlock() };
        }
        catch
        {
            _file.Dispose();
            throw;
        }
    }

    /// <inheritdoc/>
    public int FrameCount { get; }

    /// <inheritdoc/>
    public ImageSize FrameSize { get; }

    /// <inheritdoc/>
    public (string File, string Place) NextFrame => (_name, $"{_path}, frame {_next}");

    /// <inheritdoc/>
    public void ReadNext(Span<ushort> destination)
    {
        FrameSource.RequireNext(_next, FrameCount);
        Preconditions.AtLeast(destination.Length, FrameSize.PixelCount);
        if (_next >= _blockStart + (_block.Length / FrameSize.PixelCount))
        {
            _blockStart = _next;
            _block = _readBlock(_next, Math.Min(_blockFrames, FrameCount - _next));
        }

        _block.AsSpan((_next - _blockStart) * FrameSize.PixelCount, FrameSize.PixelCount).CopyTo(destination);
        _next++;
    }

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private (int Count, ImageSize Size) Shape(ulong[] dimensions)
    {
        if (dimensions.Length != 3)
        {
            throw new BadInputException(
                _name, _path, $"the dataset has {dimensions.Length} dimensions ({string.Join(" × ", dimensions)})", "give a dataset of shape (frame, y, x)");
        }

        if (dimensions[0] is 0 or > int.MaxValue)
        {
            throw new BadInputException(_name, _path, $"the dataset holds {dimensions[0]} frames", "check that recording had begun");
        }

        ImageSize size = FrameSource.CheckedSize(
            (long)Math.Min(dimensions[2], long.MaxValue), (long)Math.Min(dimensions[1], long.MaxValue), _name, _path);
        return ((int)dimensions[0], size);
    }

    private Func<int, int, ushort[]> ReaderFor(IH5DataType type)
    {
        if (type.Class != H5DataTypeClass.FixedPoint)
        {
            throw new BadInputException(_name, _path, $"its elements are of class {type.Class}, not integers", "save the camera's counts as integers");
        }

        return (type.Size, type.FixedPoint.IsSigned) switch
        {
            (1, false) => ReadBlock<byte>,
            (1, true) => ReadBlock<sbyte>,
            (2, false) => ReadBlock<ushort>,
            (2, true) => ReadBlock<short>,
            (4, false) => ReadBlock<uint>,
            (4, true) => ReadBlock<int>,
            (8, false) => ReadBlock<ulong>,
            (8, true) => ReadBlock<long>,
            _ => throw new BadInputException(_name, _path, $"its integers have {type.Size} bytes", "save 8, 16, 32 or 64 bits"),
        };
    }

    private int BlockFrames()
    {
        long frameBytes = (long)FrameSize.PixelCount * Math.Max(2, _dataset.Type.Size);
        long wanted = Math.Max(1, BlockBytes / frameBytes);
        if (ChunkShape() is not { } chunks)
        {
            return (int)Math.Min(wanted, FrameCount);
        }

        CheckChunk(chunks);
        long deep = (wanted + (long)chunks[0] - 1) / (long)chunks[0] * (long)chunks[0];
        return (int)Math.Min(FrameCount, Math.Min(deep, Math.Max(1, LargestBlockBytes / frameBytes)));
    }

    /// <summary>
    /// A cache for all chunks that a block touches. A block is read row by row across chunks; the library's default cache of 1 MB
    /// would have each chunk decompressed again for every row.
    /// </summary>
    private SimpleReadingChunkCache CacheForBlock()
    {
        if (ChunkShape() is not { } chunks)
        {
            return new SimpleReadingChunkCache(1, 1);
        }

        static ulong Covering(ulong length, ulong chunk) => (length + chunk - 1) / chunk;
        ulong count = Covering((ulong)_blockFrames, chunks[0]) * Covering((ulong)FrameSize.Height, chunks[1]) * Covering((ulong)FrameSize.Width, chunks[2]);
        ulong bytes = Math.Min(count * chunks.Aggregate((product, side) => product * side) * (ulong)_dataset.Type.Size, LargestCacheBytes);
        return new SimpleReadingChunkCache((int)Math.Min(count, int.MaxValue), bytes);
    }

    private ulong[]? ChunkShape() =>
        _dataset.Layout.Class == H5DataLayoutClass.Chunked && _dataset.Layout.Chunks is { Length: 3 } chunks ? chunks : null;

    private void CheckChunk(ulong[] chunks)
    {
        BigInteger bytes = chunks.Aggregate(BigInteger.One, (product, side) => product * side) * _dataset.Type.Size;
        if (bytes > LargestChunkBytes || bytes.IsZero)
        {
            throw new BadInputException(_name, _path, $"its chunks have {bytes} bytes", "save it in chunks of a few frames");
        }
    }

    /// <summary>
    /// Reads stored bytes and orders them here: the library refuses numbers whose most significant byte comes first.
    /// </summary>
    private ushort[] ReadBlock<T>(int firstFrame, int frameCount)
        where T : unmanaged, IBinaryInteger<T>
    {
        var read = new T[frameCount * FrameSize.PixelCount];
        Hdf5Opening.Guarded(_name, $"{_path}, frame {firstFrame}", () => ReadBytes(firstFrame, frameCount, FrameSize, read));
        if (_isBigEndian ??= IsBigEndian<T>())
        {
            Reverse(read);
        }

        return read as object as ushort[] ?? Narrow(read, firstFrame);
    }

    private bool ReadBytes<T>(int firstFrame, int frameCount, ImageSize size, T[] destination)
        where T : unmanaged
    {
        var selection = new HyperslabSelection(3, [(ulong)firstFrame, 0, 0], [(ulong)frameCount, (ulong)size.Height, (ulong)size.Width]);
        _dataset.Read(_access, MemoryMarshal.AsBytes(destination.AsSpan()), fileSelection: selection);
        return true;
    }

    /// <summary>
    /// Whether numbers are stored most significant byte first. The library does not say, but a typed read of one element (whose
    /// bytes were read before) fails for that reason alone.
    /// </summary>
    private bool IsBigEndian<T>()
        where T : unmanaged
    {
        try
        {
            _dataset.Read<T[]>(fileSelection: new HyperslabSelection(3, [0, 0, 0], [1, 1, 1]));
            return false;
        }
        catch (Exception failure) when (failure is not OutOfMemoryException)
        {
            return true;
        }
    }

    private static void Reverse<T>(T[] numbers)
        where T : unmanaged
    {
        Span<byte> bytes = MemoryMarshal.AsBytes(numbers.AsSpan());
        switch (bytes.Length / numbers.Length)
        {
            case 2:
                BinaryPrimitives.ReverseEndianness(MemoryMarshal.Cast<byte, ushort>(bytes), MemoryMarshal.Cast<byte, ushort>(bytes));
                break;
            case 4:
                BinaryPrimitives.ReverseEndianness(MemoryMarshal.Cast<byte, uint>(bytes), MemoryMarshal.Cast<byte, uint>(bytes));
                break;
            case 8:
                BinaryPrimitives.ReverseEndianness(MemoryMarshal.Cast<byte, ulong>(bytes), MemoryMarshal.Cast<byte, ulong>(bytes));
                break;
        }
    }

    private ushort[] Narrow<T>(T[] read, int firstFrame)
        where T : unmanaged, IBinaryInteger<T>
    {
        var counts = new ushort[read.Length];
        for (int i = 0; i < read.Length; i++)
        {
            // Truncation and back: equal exactly when the number lies in 0 … 65535 (or is negative in so few bits that it wraps).
            counts[i] = ushort.CreateTruncating(read[i]);
            if (read[i] < T.Zero || T.CreateTruncating(counts[i]) != read[i])
            {
                throw OutOfRange(read[i].ToString()!, firstFrame, i);
            }
        }

        return counts;
    }

    private BadInputException OutOfRange(string value, int firstFrame, int at)
    {
        int pixel = at % FrameSize.PixelCount;
        var place = new CameraPixel(pixel % FrameSize.Width, pixel / FrameSize.Width);
        return new BadInputException(
            _name, $"{_path}, frame {firstFrame + (at / FrameSize.PixelCount)}, pixel {place}", $"the value {value} lies outside 0 … 65535", "save the camera's counts as they are");
    }
}
