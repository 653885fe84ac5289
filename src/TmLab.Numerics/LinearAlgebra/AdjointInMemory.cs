using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// The conjugate transpose of a wide matrix, held in memory, so that the routines for tall ones serve it: for rows ≪ columns it
/// is small beside what a measurement of those columns took.
/// </summary>
internal sealed class AdjointInMemory : IRowBlockReader, IDisposable
{
    private readonly ComplexMatrix _adjoint;

    public AdjointInMemory(IRowBlockReader wide, SpectrumOptions options)
    {
        _adjoint = new ComplexMatrix(wide.ColumnCount, wide.RowCount);
        using var stream = new TileStream(wide, options);
        stream.Pass("reading rows", Turn, null, CancellationToken.None);
    }

    public int RowCount => _adjoint.Rows;

    public int ColumnCount => _adjoint.Columns;

    public void ReadRows(int firstRow, int rowCount, Span<Complex64> destination) =>
        _adjoint.RowBlock(firstRow, rowCount).CopyTo(destination);

    public void Dispose() => _adjoint.Dispose();

    private void Turn(NativeBuffer<Complex64> tile, int first, int rows)
    {
        int columns = _adjoint.Rows;
        Parallel.For(0, columns, column =>
        {
            Span<Complex64> to = _adjoint.Row(column).Slice(first, rows);
            for (int row = 0; row < rows; row++)
            {
                Complex64 value = tile.Slice(((long)row * columns) + column, 1)[0];
                to[row] = new Complex64(value.r, -value.i);
            }
        });
    }
}
