using TmLab.Numerics.Matrices;

namespace TmLab.TestKit;

/// <summary>A matrix held in memory, read and written in blocks of rows; remembers how many rows were read.</summary>
public sealed class InMemoryMatrix(int rows, int columns) : IRowBlockReader, IRowBlockWriter
{
    private readonly Complex64[] _elements = new Complex64[rows * columns];
    private int _rowsRead;

    public int RowCount => rows;

    public int ColumnCount => columns;

    public int RowsRead => _rowsRead;

    public Span<Complex64> Row(int row) => _elements.AsSpan(row * columns, columns);

    public void ReadRows(int firstRow, int rowCount, Span<Complex64> destination)
    {
        Interlocked.Add(ref _rowsRead, rowCount);
        _elements.AsSpan(firstRow * columns, rowCount * columns).CopyTo(destination);
    }

    public void WriteRows(int firstRow, ReadOnlySpan<Complex64> source) => source.CopyTo(_elements.AsSpan(firstRow * columns));
}
