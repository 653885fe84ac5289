using System.Numerics;
using TmLab.Numerics.LinearAlgebra.Managed;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Statistics;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// Leading singular values and input vectors of a tall matrix from a few passes: a random block Ω of l = K + p columns (Halko,
/// Martinsson and Tropp, SIAM Rev. 53, 217 (2011)), multiplied by A†A once a pass, all blocks kept as one basis B (block Krylov,
/// Musco and Musco, NIPS 28 (2015)). Rayleigh–Ritz on B: the pairs (θ², y) of B†A†A B give values θ and vectors B y. Since A†A B is
/// at hand, each pair's residual r = A†A B y − θ² B y is too, and some singular value σ of A has |σ² − θ²| ≤ ‖r‖ (Parlett, The
/// Symmetric Eigenvalue Problem (1998), §4.5), hence |σ − θ| ≤ ‖r‖/θ. Products are single precision, sums and the basis double.
/// </summary>
internal sealed class KrylovSearch : IDisposable
{
    // A new direction that keeps less than this of its length outside the basis is rounding noise of the products.
    private const double Dependent = 1e-6;

    private readonly IRowBlockReader _matrix;
    private readonly int _count;
    private readonly ILinearAlgebraEngine _engine;
    private readonly SpectrumOptions _options;
    private readonly IProgress<PassProgress>? _progress;
    private readonly CancellationToken _cancellation;
    private readonly TileStream _stream;
    private readonly int _block;
    private readonly SplitMatrix _basis;
    private readonly SplitMatrix _images;
    private int _size;
    private int _passes;

    // Candidates for the basis stand in its rows behind those in use.
    private int _candidates;

    public KrylovSearch(
        IRowBlockReader tall,
        int count,
        ILinearAlgebraEngine engine,
        SpectrumOptions options,
        IProgress<PassProgress>? progress,
        CancellationToken cancellation)
    {
        _matrix = tall;
        _count = count;
        _engine = engine;
        _options = options;
        _progress = progress;
        _cancellation = cancellation;
        _stream = new TileStream(tall, options);
        int n = tall.ColumnCount;
        _block = Math.Min(n, count + options.Oversampling);
        int most = (int)Math.Min(n, (long)_block * options.MaximumPasses);
        _basis = new SplitMatrix(most, n);
        _images = new SplitMatrix(most, n);
    }

    /// <summary>Iterates until every bound is small enough, the passes are used up or the space is exhausted.</summary>
    public (SpectrumOutcome Spectrum, Complex128Matrix Adjoint) Run()
    {
        Start();
        while (true)
        {
            int added = Orthonormalise();
            if (added > 0)
            {
                MultiplyLast(added);
                _size += added;
            }

            using HermitianEigen ritz = RayleighRitz();
            double[] values = [.. ritz.Values.Select(value => Math.Sqrt(Math.Max(0, value)))];
            (double[] bounds, Complex128Matrix adjoint) = Residuals(ritz, values);
            bool precise = bounds.Zip(values).All(pair => pair.First <= _options.RandomisedAccuracy * pair.Second);
            if (precise || added == 0 || _passes == _options.MaximumPasses || _size == _matrix.ColumnCount)
            {
                return (Outcome(values, bounds), adjoint);
            }

            adjoint.Dispose();
            Extend(added);
        }
    }

    public void Dispose()
    {
        _stream.Dispose();
        _basis.Dispose();
        _images.Dispose();
    }

    private SpectrumOutcome Outcome(double[] values, double[] bounds)
    {
        double condition = values[0] == 0 ? 1 : values[0] / values[^1];
        double error = values[0] == 0 ? 0 : bounds[^1] / values[^1];
        return new SpectrumOutcome([.. values], SpectrumMethod.Randomised, condition, error, [.. bounds], _passes);
    }

    private void Start()
    {
        _candidates = _block;
        for (int row = 0; row < _block; row++)
        {
            var random = new SeededRandom(_options.Seed, (ulong)row);
            for (int k = 0; k < _matrix.ColumnCount; k++)
            {
                Complex value = random.NextComplexNormal();
                (_basis.Real(row)[k], _basis.Imaginary(row)[k]) = (value.Real, value.Imaginary);
            }
        }
    }

    // The images of the last block are the next candidates.
    private void Extend(int added)
    {
        _candidates = Math.Min(added, _basis.Rows - _size);
        for (int j = 0; j < _candidates; j++)
        {
            _images.Real(_size - added + j).CopyTo(_basis.Real(_size + j));
            _images.Imaginary(_size - added + j).CopyTo(_basis.Imaginary(_size + j));
        }
    }

    // Gram–Schmidt, twice: against the rows in use for all candidates at once, then among the candidates, the dependent ones dropped.
    private int Orthonormalise()
    {
        var lengths = new double[_candidates];
        Parallel.For(0, _candidates, j =>
        {
            lengths[j] = Length(_size + j);
            Remove(_size + j, 0, _size);
            Remove(_size + j, 0, _size);
        });
        int kept = 0;
        for (int j = 0; j < _candidates; j++)
        {
            Move(_size + j, _size + kept);
            Remove(_size + kept, _size, _size + kept);
            Remove(_size + kept, 0, _size + kept);
            double length = Length(_size + kept);
            if (length > Dependent * lengths[j])
            {
                Scale(_size + kept, 1 / length);
                Remove(_size + kept, 0, _size + kept);
                Scale(_size + kept, 1 / Length(_size + kept));
                kept++;
            }
        }

        return kept;
    }

    private double Length(int row) =>
        Math.Sqrt(SplitRow.Inner(_basis.Real(row), _basis.Imaginary(row), _basis.Real(row), _basis.Imaginary(row)).Real);

    private void Remove(int row, int first, int end)
    {
        for (int other = first; other < end; other++)
        {
            Complex part = SplitRow.Inner(_basis.Real(other), _basis.Imaginary(other), _basis.Real(row), _basis.Imaginary(row));
            SplitRow.AddMultiple(-part, _basis.Real(other), _basis.Imaginary(other), _basis.Real(row), _basis.Imaginary(row));
        }
    }

    private void Move(int from, int to)
    {
        if (from != to)
        {
            _basis.Real(from).CopyTo(_basis.Real(to));
            _basis.Imaginary(from).CopyTo(_basis.Imaginary(to));
        }
    }

    private void Scale(int row, double factor)
    {
        Span<double> real = _basis.Real(row), imaginary = _basis.Imaginary(row);
        for (int k = 0; k < real.Length; k++)
        {
            real[k] *= factor;
            imaginary[k] *= factor;
        }
    }

    // One pass: images of the newest rows, A†(A q), tile by tile.
    private void MultiplyLast(int added)
    {
        int n = _matrix.ColumnCount, from = _size;
        using NativeBuffer<Complex64> block = Columns(from, added);
        using var forward = new NativeBuffer<Complex64>((long)_stream.TileRows * added);
        using var back = new NativeBuffer<Complex64>((long)n * added);
        _passes++;
        _stream.Pass(
            "randomised search",
            (tile, _, rows) =>
            {
                _engine.Multiply(tile, block, forward, new ProductShape(rows, added, n));
                _engine.MultiplyAdjoint(tile, forward, back, new ProductShape(n, added, rows));
                AddTransposed(back, from, added);
            },
            _progress,
            _cancellation);
    }

    private NativeBuffer<Complex64> Columns(int from, int added)
    {
        int n = _matrix.ColumnCount;
        var block = new NativeBuffer<Complex64>((long)n * added);
        for (int k = 0; k < n; k++)
        {
            Span<Complex64> to = block.Slice((long)k * added, added);
            for (int j = 0; j < added; j++)
            {
                to[j] = new Complex64((float)_basis.Real(from + j)[k], (float)_basis.Imaginary(from + j)[k]);
            }
        }

        return block;
    }

    private void AddTransposed(NativeBuffer<Complex64> back, int from, int added) => Parallel.For(0, added, j =>
    {
        Span<double> real = _images.Real(from + j), imaginary = _images.Imaginary(from + j);
        for (int k = 0; k < real.Length; k++)
        {
            Complex64 value = back.Slice(((long)k * added) + j, 1)[0];
            real[k] += value.r;
            imaginary[k] += value.i;
        }
    });

    // Upper triangle of the Hermitian part of B†(A†A B).
    private HermitianEigen RayleighRitz()
    {
        using var projected = new Complex128Matrix(_size, _size);
        Parallel.For(0, _size, i =>
        {
            for (int j = i; j < _size; j++)
            {
                Complex upper = SplitRow.Inner(_basis.Real(i), _basis.Imaginary(i), _images.Real(j), _images.Imaginary(j));
                Complex lower = SplitRow.Inner(_basis.Real(j), _basis.Imaginary(j), _images.Real(i), _images.Imaginary(i));
                projected[i, j] = (upper + Complex.Conjugate(lower)) / 2;
            }
        });
        return _engine.HermitianEigenvectors(projected, Math.Min(_count, _size));
    }

    private (double[] Bounds, Complex128Matrix Adjoint) Residuals(HermitianEigen ritz, double[] values)
    {
        var bounds = new double[values.Length];
        var adjoint = new Complex128Matrix(values.Length, _matrix.ColumnCount);
        using var vectors = new SplitMatrix(values.Length, _matrix.ColumnCount);
        using var residuals = new SplitMatrix(values.Length, _matrix.ColumnCount);
        Parallel.For(0, values.Length, j =>
        {
            Span<double> vr = vectors.Real(j), vi = vectors.Imaginary(j), rr = residuals.Real(j), ri = residuals.Imaginary(j);
            for (int m = 0; m < _size; m++)
            {
                Complex y = Complex.Conjugate(ritz.VectorsAdjoint[j, m]);
                SplitRow.AddMultiple(y, _basis.Real(m), _basis.Imaginary(m), vr, vi);
                SplitRow.AddMultiple(y, _images.Real(m), _images.Imaginary(m), rr, ri);
            }

            SplitRow.AddMultiple(-values[j] * values[j], vr, vi, rr, ri);
            double residual = Math.Sqrt(SplitRow.Inner(rr, ri, rr, ri).Real);
            bounds[j] = residual == 0 ? 0 : residual / values[j];
            SetAdjoint(adjoint.Row(j), vr, vi);
        });
        return (bounds, adjoint);
    }

    private static void SetAdjoint(Span<Complex> to, ReadOnlySpan<double> real, ReadOnlySpan<double> imaginary)
    {
        for (int k = 0; k < to.Length; k++)
        {
            to[k] = new Complex(real[k], -imaginary[k]);
        }
    }
}
