using TmLab.Numerics.Matrices;

namespace TmLab.Benchmarks;

/// <summary>Takes matrix rows into native memory that has been touched before.</summary>
internal sealed class RowsInMemory(int rows, int columns) : IRowBlockWriter, IDisposable
{
    private readonly NativeBuffer<Complex64> _elements = new((long)rows * columns);

    public void WriteRows(int firstRow, ReadOnlySpan<Complex64> source) =>
        source.CopyTo(_elements.Slice((long)firstRow * columns, source.Length));

    public void Dispose() => _elements.Dispose();
}
