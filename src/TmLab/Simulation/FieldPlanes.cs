using TmLab.Numerics.Matrices;

namespace TmLab.Simulation;

/// <summary>
/// Complex fields, real and imaginary parts in planes of their own: row = mode or pattern, column = pupil point or pixel. Rows
/// are contiguous, so that work over pixels runs along the processor's vector lanes.
/// </summary>
internal sealed class FieldPlanes : IDisposable
{
    private readonly NativeBuffer<float> _real;
    private readonly NativeBuffer<float> _imaginary;

    public FieldPlanes(int rows, int columns)
    {
        Rows = rows;
        Columns = columns;
        _real = new NativeBuffer<float>((long)rows * columns);
        _imaginary = new NativeBuffer<float>((long)rows * columns);
    }

    public int Rows { get; }

    public int Columns { get; }

    public Span<float> Real(int row) => _real.Slice((long)row * Columns, Columns);

    public Span<float> Imaginary(int row) => _imaginary.Slice((long)row * Columns, Columns);

    /// <summary>Multiplies every element by a real number.</summary>
    public void Scale(double factor)
    {
        for (int row = 0; row < Rows; row++)
        {
            ScaleRow(Real(row), (float)factor);
            ScaleRow(Imaginary(row), (float)factor);
        }
    }

    /// <summary>Adds other fields of the same shape.</summary>
    public void Add(FieldPlanes other)
    {
        for (int row = 0; row < Rows; row++)
        {
            AddRow(Real(row), other.Real(row));
            AddRow(Imaginary(row), other.Imaginary(row));
        }
    }

    /// <summary>The transposed fields as one matrix (column of this, row of this): pixel × mode.</summary>
    public ComplexMatrix ToTransposedMatrix()
    {
        var matrix = new ComplexMatrix(Columns, Rows);
        for (int row = 0; row < Rows; row++)
        {
            ReadOnlySpan<float> re = Real(row);
            ReadOnlySpan<float> im = Imaginary(row);
            for (int column = 0; column < Columns; column++)
            {
                matrix[column, row] = new Complex64(re[column], im[column]);
            }
        }

        return matrix;
    }

    public void Dispose()
    {
        _real.Dispose();
        _imaginary.Dispose();
    }

    private static void ScaleRow(Span<float> row, float factor)
    {
        for (int i = 0; i < row.Length; i++)
        {
            row[i] *= factor;
        }
    }

    private static void AddRow(Span<float> row, ReadOnlySpan<float> other)
    {
        for (int i = 0; i < row.Length; i++)
        {
            row[i] += other[i];
        }
    }
}
