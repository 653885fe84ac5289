using System.Runtime.InteropServices;
using Microsoft.Win32.SafeHandles;
using TmLab.Failures;
using TmLab.Numerics;

namespace TmLab.Storage.Hdf5;

/// <summary>Blocks of a dataset that stands in the file as one run of bytes, read straight from there.</summary>
internal sealed class ContiguousBlocks<T> : IDatasetBlocks<T>
    where T : unmanaged
{
    private readonly SafeFileHandle _file;
    private readonly string _fileName;
    private readonly string _dataset;
    private readonly bool _swapped;

    /// <summary>Takes a dataset whose place is known and lies within the file.</summary>
    public ContiguousBlocks(
        SafeFileHandle file, string fileName, string dataset, long offset, long rowCount, long columnCount, bool swapped)
    {
        _file = file;
        _fileName = fileName;
        _dataset = dataset;
        _swapped = swapped;
        Offset = offset;
        RowCount = rowCount;
        ColumnCount = columnCount;
    }

    /// <summary>Where the first byte stands in the file.</summary>
    public long Offset { get; }

    /// <inheritdoc/>
    public long RowCount { get; }

    /// <inheritdoc/>
    public long ColumnCount { get; }

    /// <inheritdoc/>
    public void Read(long firstRow, int rowCount, long firstColumn, int columnCount, Span<T> destination)
    {
        Preconditions.InRange(rowCount, 0, RowCount);
        Preconditions.InRange(firstRow, 0, RowCount - rowCount);
        Preconditions.InRange(columnCount, 0, ColumnCount);
        Preconditions.InRange(firstColumn, 0, ColumnCount - columnCount);
        Preconditions.AtLeast(destination.Length, (long)rowCount * columnCount);
        Span<T> wanted = destination[..(rowCount * columnCount)];
        if (columnCount == ColumnCount)
        {
            ReadRun(firstRow * ColumnCount, wanted);
        }
        else
        {
            for (int row = 0; row < rowCount; row++)
            {
                ReadRun(((firstRow + row) * ColumnCount) + firstColumn, wanted.Slice(row * columnCount, columnCount));
            }
        }

        if (_swapped)
        {
            ElementTypes.SwapParts(wanted);
        }
    }

    private unsafe void ReadRun(long firstElement, Span<T> destination)
    {
        long position = Offset + (firstElement * sizeof(T));
        Span<T> rest = destination;
        while (!rest.IsEmpty)
        {
            // A span of elements may have more bytes than a span of bytes can.
            Span<T> piece = rest[..Math.Min(rest.Length, (1 << 30) / sizeof(T))];
            ReadExactly(MemoryMarshal.AsBytes(piece), position);
            position += (long)piece.Length * sizeof(T);
            rest = rest[piece.Length..];
        }
    }

    private void ReadExactly(Span<byte> destination, long position)
    {
        while (!destination.IsEmpty)
        {
            int count = ReadSome(destination, position);
            if (count == 0)
            {
                throw DamagedFiles.Damaged(_fileName, _dataset, $"is cut off at byte {position} of the file");
            }

            destination = destination[count..];
            position += count;
        }
    }

    private int ReadSome(Span<byte> destination, long position)
    {
        try
        {
            return RandomAccess.Read(_file, destination, position);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new BadInputException(_fileName, _dataset, $"cannot be read ({e.Message.TrimEnd('.')})", "check the disk", e);
        }
    }
}
