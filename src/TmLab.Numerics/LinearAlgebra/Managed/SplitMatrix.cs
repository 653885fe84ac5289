using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>A complex matrix as two row-major planes of doubles, the form in which C# vectorises complex arithmetic well.</summary>
internal sealed class SplitMatrix : IDisposable
{
    private readonly NativeBuffer<double> _real;
    private readonly NativeBuffer<double> _imaginary;

    public SplitMatrix(int rows, int columns)
    {
        Rows = rows;
        Columns = columns;
        _real = new NativeBuffer<double>((long)rows * columns);
        _imaginary = new NativeBuffer<double>((long)rows * columns);
    }

    public int Rows { get; }

    public int Columns { get; }

    public Span<double> Real(int row) => _real.Slice((long)row * Columns, Columns);

    public Span<double> Imaginary(int row) => _imaginary.Slice((long)row * Columns, Columns);

    public static SplitMatrix From(Complex128Matrix matrix)
    {
        var split = new SplitMatrix(matrix.Rows, matrix.Columns);
        for (int row = 0; row < matrix.Rows; row++)
        {
            split.SetRow(row, matrix.Row(row));
        }

        return split;
    }

    /// <summary>A†.</summary>
    public static SplitMatrix FromAdjoint(Complex128Matrix matrix)
    {
        var split = new SplitMatrix(matrix.Columns, matrix.Rows);
        for (int row = 0; row < matrix.Rows; row++)
        {
            Span<Complex> from = matrix.Row(row);
            for (int column = 0; column < from.Length; column++)
            {
                split.Real(column)[row] = from[column].Real;
                split.Imaginary(column)[row] = -from[column].Imaginary;
            }
        }

        return split;
    }

    /// <summary>The whole Hermitian matrix whose upper triangle is given.</summary>
    public static SplitMatrix FromUpper(Complex128Matrix matrix)
    {
        SplitMatrix split = From(matrix);
        for (int row = 0; row < matrix.Rows; row++)
        {
            split.Imaginary(row)[row] = 0;
            for (int column = row + 1; column < matrix.Columns; column++)
            {
                split.Real(column)[row] = split.Real(row)[column];
                split.Imaginary(column)[row] = -split.Imaginary(row)[column];
            }
        }

        return split;
    }

    public void SetRow(int row, ReadOnlySpan<Complex> values)
    {
        Span<double> real = Real(row), imaginary = Imaginary(row);
        for (int k = 0; k < values.Length; k++)
        {
            real[k] = values[k].Real;
            imaginary[k] = values[k].Imaginary;
        }
    }

    public void Dispose()
    {
        _real.Dispose();
        _imaginary.Dispose();
    }
}
