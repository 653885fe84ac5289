namespace TmLab.Numerics.Matrices;

/// <summary>
/// Owns a dense matrix of complex64 numbers in native memory. Layout, stated here once: row-major, rows back to back without
/// padding; element (row, column) stands at index row · Columns + column.
/// </summary>
public sealed class ComplexMatrix : IDisposable
{
    private readonly NativeBuffer<Complex64> _buffer;

    /// <summary>Takes a matrix of zeros.</summary>
    /// <param name="rows">Number of rows, ≥ 0.</param>
    /// <param name="columns">Number of columns, ≥ 0.</param>
    public ComplexMatrix(int rows, int columns)
    {
        Preconditions.InRange(rows, 0, int.MaxValue);
        Preconditions.InRange(columns, 0, int.MaxValue);
        Rows = rows;
        Columns = columns;
        _buffer = new NativeBuffer<Complex64>((long)rows * columns);
    }

    /// <summary>Number of rows.</summary>
    public int Rows { get; }

    /// <summary>Number of columns.</summary>
    public int Columns { get; }

    /// <summary>The elements in row-major order, in native memory.</summary>
    public NativeBuffer<Complex64> Buffer => _buffer;

    /// <summary>The element at (<paramref name="row"/>, <paramref name="column"/>).</summary>
    public ref Complex64 this[int row, int column] => ref Row(row)[column];

    /// <summary>One row, for reading and writing.</summary>
    public Span<Complex64> Row(int row) => _buffer.Slice((long)row * Columns, Columns);

    /// <summary>Several rows back to back.</summary>
    public Span<Complex64> RowBlock(int firstRow, int count) =>
        _buffer.Slice((long)firstRow * Columns, checked(count * Columns));

    /// <inheritdoc/>
    public void Dispose() => _buffer.Dispose();
}
