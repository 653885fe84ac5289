using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// Owns a dense matrix of double-precision complex numbers in native memory: row-major, rows back to back without padding;
/// element (row, column) stands at index row · Columns + column. For the small square matrices of a decomposition and for
/// double-precision tiles; measured matrices are <see cref="ComplexMatrix"/>.
/// </summary>
public sealed class Complex128Matrix : IDisposable
{
    /// <summary>Takes a matrix of zeros.</summary>
    /// <param name="rows">Number of rows, ≥ 0.</param>
    /// <param name="columns">Number of columns, ≥ 0.</param>
    public Complex128Matrix(int rows, int columns)
    {
        Preconditions.InRange(rows, 0, int.MaxValue);
        Preconditions.InRange(columns, 0, int.MaxValue);
        Rows = rows;
        Columns = columns;
        Buffer = new NativeBuffer<Complex>((long)rows * columns);
    }

    /// <summary>Number of rows.</summary>
    public int Rows { get; }

    /// <summary>Number of columns.</summary>
    public int Columns { get; }

    /// <summary>The elements in row-major order, in native memory.</summary>
    public NativeBuffer<Complex> Buffer { get; }

    /// <summary>The element at (<paramref name="row"/>, <paramref name="column"/>).</summary>
    public ref Complex this[int row, int column] => ref Row(row)[column];

    /// <summary>One row, for reading and writing.</summary>
    public Span<Complex> Row(int row) => Buffer.Slice((long)row * Columns, Columns);

    /// <summary>Sets every element to zero.</summary>
    public void Clear()
    {
        for (int row = 0; row < Rows; row++)
        {
            Row(row).Clear();
        }
    }

    /// <summary>A copy in memory of its own.</summary>
    public Complex128Matrix Copy()
    {
        var copy = new Complex128Matrix(Rows, Columns);
        for (int row = 0; row < Rows; row++)
        {
            Row(row).CopyTo(copy.Row(row));
        }

        return copy;
    }

    /// <inheritdoc/>
    public void Dispose() => Buffer.Dispose();
}
