using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>The pass U = A V Σ⁻¹, with the check of what was written: W†W of W = A V is summed on the way.</summary>
internal sealed class OutputVectorPass : IDisposable
{
    /// <summary>Values below this part of the largest have no direction in single precision.</summary>
    private const double Lost = 1e-6;

    private readonly IRowBlockReader _matrix;
    private readonly ComplexMatrix _vectors;
    private readonly double[] _values;
    private readonly ILinearAlgebraEngine _engine;
    private readonly TileStream _stream;
    private readonly NativeBuffer<Complex64> _products;
    private readonly Complex128Matrix _overlaps;

    public OutputVectorPass(
        IRowBlockReader matrix, ComplexMatrix vectors, double[] values, ILinearAlgebraEngine engine, SpectrumOptions options)
    {
        Preconditions.SameLength(vectors.Columns, values.Length);
        _matrix = matrix;
        _vectors = vectors;
        _values = values;
        _engine = engine;
        _stream = new TileStream(matrix, options);
        _products = new NativeBuffer<Complex64>((long)_stream.TileRows * vectors.Columns);
        _overlaps = new Complex128Matrix(vectors.Columns, vectors.Columns);
    }

    public OutputVectorCheck Run(IRowBlockWriter writer, IProgress<PassProgress>? progress, CancellationToken cancellation)
    {
        float[] scale = [.. _values.Select(value => Known(value) ? (float)(1 / value) : 0)];
        _stream.Pass("computing output vectors", (tile, first, rows) => Tile(writer, tile, first, rows, scale), progress, cancellation);
        return Compare();
    }

    public void Dispose()
    {
        _stream.Dispose();
        _products.Dispose();
        _overlaps.Dispose();
    }

    private bool Known(double value) => value > 0 && value > Lost * _values[0];

    // Scaled before the overlap is summed, so that it is of order 1 whatever the matrix' unit.
    private void Tile(IRowBlockWriter writer, NativeBuffer<Complex64> tile, int first, int rows, float[] scale)
    {
        int k = _vectors.Columns;
        _engine.Multiply(tile, _vectors.Buffer, _products, new ProductShape(rows, k, _matrix.ColumnCount));
        Parallel.For(0, rows, row =>
        {
            Span<Complex64> values = _products.Slice((long)row * k, k);
            for (int j = 0; j < k; j++)
            {
                values[j] = new Complex64(values[j].r * scale[j], values[j].i * scale[j]);
            }
        });
        _engine.AddGram(_products, rows, _overlaps);
        writer.WriteRows(first, _products.Slice(0, checked(rows * k)));
    }

    // With U = A V Σ⁻¹: U†A V = (U†U) Σ.
    private OutputVectorCheck Compare()
    {
        double diagonal = 0, orthonormal = 0;
        for (int i = 0; i < _values.Length; i++)
        {
            for (int j = i; j < _values.Length; j++)
            {
                if (Known(_values[i]) && Known(_values[j]))
                {
                    double error = (_overlaps[i, j] - (i == j ? 1 : 0)).Magnitude;
                    orthonormal = Math.Max(orthonormal, error);
                    diagonal = Math.Max(diagonal, error * Math.Max(_values[i], _values[j]) / _values[0]);
                }
            }
        }

        return new OutputVectorCheck(diagonal, orthonormal);
    }
}
