using System.Numerics;
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
    private const long LargestChunkBytes = 1L << 30;

    private readonly NativeFile _file;
    private readonly NativeDataset _dataset;
    private readonly string _name;
    private readonly string _path;
    private readonly Func<int, int, ushort[]> _readBlock;
    private readonly int _blockFrames;
    private ushort[] _block = [];
    private int _blockStart;
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
        ulong[]? chunks = _dataset.Layout.Class == H5DataLayoutClass.Chunked ? _dataset.Layout.Chunks : null;
        if (chunks is not { Length: 3 })
        {
            return (int)Math.Min(wanted, FrameCount);
        }

        CheckChunk(chunks);
        long deep = (wanted + (long)chunks[0] - 1) / (long)chunks[0] * (long)chunks[0];
        return (int)Math.Min(FrameCount, Math.Min(deep, Math.Max(1, LargestBlockBytes / frameBytes)));
    }

    private void CheckChunk(ulong[] chunks)
    {
        BigInteger bytes = chunks.Aggregate(BigInteger.One, (product, side) => product * side) * _dataset.Type.Size;
        if (bytes > LargestChunkBytes || bytes.IsZero)
        {
            throw new BadInputException(_name, _path, $"its chunks have {bytes} bytes", "save it in chunks of a few frames");
        }
    }

    private ushort[] ReadBlock<T>(int firstFrame, int frameCount)
        where T : unmanaged, IBinaryInteger<T>
    {
        var selection = new HyperslabSelection(
            3, [(ulong)firstFrame, 0, 0], [(ulong)frameCount, (ulong)FrameSize.Height, (ulong)FrameSize.Width]);
        T[] read = Hdf5Opening.Guarded(_name, $"{_path}, frame {firstFrame}", () => _dataset.Read<T[]>(fileSelection: selection));
        if (read.Length != (long)frameCount * FrameSize.PixelCount)
        {
            throw new BadInputException(_name, $"{_path}, frame {firstFrame}", "fewer numbers are stored than the shape says", "copy the file again from the bench");
        }

        return read as object as ushort[] ?? Narrow(read, firstFrame);
    }

    private ushort[] Narrow<T>(T[] read, int firstFrame)
        where T : unmanaged, IBinaryInteger<T>
    {
        var counts = new ushort[read.Length];
        for (int i = 0; i < read.Length; i++)
        {
            // Truncation and back: equal exactly when the number lies in 0 … 65535.
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
