using PureHDF.Selections;
using PureHDF.VOL.Native;
using TmLab.Numerics;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// Blocks of a dataset that is stored in another way than as one run of bytes (chunked, compressed, another byte order: files
/// rewritten by other programs), read through the HDF5 library. Slower, and one thread at a time.
/// </summary>
internal sealed class SelectedBlocks<T> : IDatasetBlocks<T>
    where T : unmanaged
{
    // The library counts bytes in 32 bits; this also bounds the memory that a rectangle of part rows takes.
    private const int MostBytesAtOnce = 64 << 20;

    private readonly NativeDataset _dataset;
    private readonly Lock _gate;
    private readonly string _fileName;
    private readonly string _name;
    private readonly ulong[] _dimensions;
    private readonly bool _swapped;

    /// <summary>Takes a dataset whose type and shape have been checked.</summary>
    public SelectedBlocks(NativeDataset dataset, Lock gate, string fileName, string name, bool swapped)
    {
        _dataset = dataset;
        _gate = gate;
        _fileName = fileName;
        _name = name;
        _swapped = swapped;
        _dimensions = dataset.Space.Dimensions;
        RowCount = (long)_dimensions[0];
        ColumnCount = _dimensions.Skip(1).Aggregate(1L, (a, b) => a * (long)b);
    }

    /// <inheritdoc/>
    public long RowCount { get; }

    /// <inheritdoc/>
    public long ColumnCount { get; }

    // Elements for each index of the second dimension: an image row, or one element of a matrix.
    private long LineLength => _dimensions.Skip(2).Aggregate(1L, (a, b) => a * (long)b);

    /// <inheritdoc/>
    public void Read(long firstRow, int rowCount, long firstColumn, int columnCount, Span<T> destination)
    {
        Preconditions.InRange(rowCount, 0, RowCount);
        Preconditions.InRange(firstRow, 0, RowCount - rowCount);
        Preconditions.InRange(columnCount, 0, ColumnCount);
        Preconditions.InRange(firstColumn, 0, ColumnCount - columnCount);
        Preconditions.AtLeast(destination.Length, (long)rowCount * columnCount);
        if (rowCount == 0 || columnCount == 0)
        {
            return;
        }

        Span<T> wanted = destination[..(rowCount * columnCount)];
        long firstLine = firstColumn / LineLength;
        long lineCount = ((firstColumn + columnCount + LineLength - 1) / LineLength) - firstLine;
        ReadLines(firstRow, rowCount, firstLine, lineCount, (int)(firstColumn - (firstLine * LineLength)), columnCount, wanted);
        if (_swapped)
        {
            ElementTypes.SwapParts(wanted);
        }
    }

    private unsafe void ReadLines(
        long firstRow, int rowCount, long firstLine, long lineCount, int skip, int columnCount, Span<T> destination)
    {
        long covered = lineCount * LineLength;
        int rowsAtOnce = (int)Math.Clamp(MostBytesAtOnce / (covered * sizeof(T)), 1, rowCount);
        T[] scratch = covered == columnCount ? [] : new T[checked(rowsAtOnce * covered)];
        for (int done = 0; done < rowCount; done += rowsAtOnce)
        {
            int rows = Math.Min(rowsAtOnce, rowCount - done);
            Span<T> part = destination.Slice(done * columnCount, rows * columnCount);
            Span<T> whole = scratch.Length == 0 ? part : scratch.AsSpan(0, (int)(rows * covered));
            Select(firstRow + done, rows, firstLine, lineCount, whole);
            for (int row = 0; scratch.Length > 0 && row < rows; row++)
            {
                whole.Slice((int)(row * covered) + skip, columnCount).CopyTo(part[(row * columnCount)..]);
            }
        }
    }

    private void Select(long firstRow, int rows, long firstLine, long lineCount, Span<T> destination)
    {
        ulong[] starts = new ulong[_dimensions.Length];
        ulong[] blocks = [.. _dimensions];
        starts[0] = (ulong)firstRow;
        blocks[0] = (ulong)rows;
        if (_dimensions.Length > 1)
        {
            starts[1] = (ulong)firstLine;
            blocks[1] = (ulong)lineCount;
        }

        try
        {
            lock (_gate)
            {
                _dataset.Read(destination, fileSelection: new HyperslabSelection(starts.Length, starts, blocks));
            }
        }
        catch (Exception e) when (DamagedFiles.IsForeign(e))
        {
            throw DamagedFiles.Translate(_fileName, _name, e);
        }
    }
}
