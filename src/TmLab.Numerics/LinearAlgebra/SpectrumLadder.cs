using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// The exact routes to a tall matrix' spectrum, from the fastest to the most accurate; the next one is taken when the condition
/// number that the present one finds says that it loses the smallest value asked for: the relative error of σ is about u (σ₁/σ)²
/// from a Gram matrix computed with unit roundoff u, and u σ₁/σ from a triangular factor (Golub and Van Loan 2013, §8.6.3; the
/// factor by tiles: Demmel, Grigori, Hoemmen and Langou, SIAM J. Sci. Comput. 34, A206 (2012)).
/// </summary>
internal sealed class SpectrumLadder
{
    private const double SingleRoundoff = 5.96e-8;
    private const double DoubleRoundoff = 1.11e-16;

    // Squares of numbers outside leave, times the rows of a block, the range of single precision.
    private const float LargestForSingle = 1e15f;
    private const float SmallestForSingle = 1e-15f;

    private readonly IRowBlockReader _matrix;
    private readonly ILinearAlgebraEngine _engine;
    private readonly SpectrumOptions _options;
    private readonly IProgress<PassProgress>? _progress;
    private readonly CancellationToken _cancellation;
    private int _passes;

    public SpectrumLadder(
        IRowBlockReader tall,
        ILinearAlgebraEngine engine,
        SpectrumOptions options,
        IProgress<PassProgress>? progress,
        CancellationToken cancellation)
    {
        _matrix = tall;
        _engine = engine;
        _options = options;
        _progress = progress;
        _cancellation = cancellation;
    }

    private delegate (double[] Values, Complex128Matrix? Adjoint) Decomposition(Complex128Matrix matrix);

    public SpectrumOutcome Values()
    {
        (SpectrumOutcome outcome, _) = Climb(
            _matrix.ColumnCount,
            gram => (Roots(_engine.HermitianEigenvalues(gram)), null),
            factor => (_engine.SingularValues(factor), null));
        return outcome;
    }

    public (SpectrumOutcome Spectrum, Complex128Matrix Adjoint) Vectors(int count)
    {
        (SpectrumOutcome outcome, Complex128Matrix? adjoint) = Climb(count, gram => GramVectors(gram, count), factor => FactorVectors(factor, count));
        return (outcome, adjoint!);
    }

    private (SpectrumOutcome Outcome, Complex128Matrix? Adjoint) Climb(int count, Decomposition ofGram, Decomposition ofFactor)
    {
        foreach (SpectrumMethod method in (SpectrumMethod[])[SpectrumMethod.Gram, SpectrumMethod.DoubleGram])
        {
            using Complex128Matrix? gram = method == SpectrumMethod.Gram ? SingleGram() : DoubleGram();
            if (gram is null)
            {
                continue;
            }

            _cancellation.ThrowIfCancellationRequested();
            (double[] values, Complex128Matrix? adjoint) = ofGram(gram);
            SpectrumOutcome outcome = Outcome(values, method, count);
            if (outcome.RelativeErrorEstimate <= _options.RelativeAccuracy || values[0] == 0)
            {
                return (outcome, adjoint);
            }

            adjoint?.Dispose();
        }

        using Complex128Matrix factor = TriangularFactor();
        _cancellation.ThrowIfCancellationRequested();
        (double[] last, Complex128Matrix? vectors) = ofFactor(factor);
        return (Outcome(last, SpectrumMethod.TallSkinnyQr, count), vectors);
    }

    private SpectrumOutcome Outcome(double[] values, SpectrumMethod method, int count)
    {
        double condition = values[0] == 0 ? 1 : values[0] / values[count - 1];
        double error = method switch
        {
            SpectrumMethod.Gram => SingleRoundoff * condition * condition,
            SpectrumMethod.DoubleGram => DoubleRoundoff * condition * condition,
            _ => DoubleRoundoff * condition,
        };
        return new SpectrumOutcome([.. values], method, condition, error, [], _passes);
    }

    private static double[] Roots(IEnumerable<double> eigenvalues) => [.. eigenvalues.Select(value => Math.Sqrt(Math.Max(0, value)))];

    private (double[] Values, Complex128Matrix? Adjoint) GramVectors(Complex128Matrix gram, int count)
    {
        HermitianEigen eigen = _engine.HermitianEigenvectors(gram, count);
        return (Roots(eigen.Values), eigen.VectorsAdjoint);
    }

    private (double[] Values, Complex128Matrix? Adjoint) FactorVectors(Complex128Matrix factor, int count)
    {
        using ThinSvd svd = _engine.ThinSvd(factor);
        var adjoint = new Complex128Matrix(count, factor.Columns);
        for (int row = 0; row < count; row++)
        {
            svd.VectorsAdjoint.Row(row).CopyTo(adjoint.Row(row));
        }

        return ([.. svd.Values[..count]], adjoint);
    }

    // Null when the numbers' range is not that of single-precision squares.
    private Complex128Matrix? SingleGram()
    {
        var gram = new Complex128Matrix(_matrix.ColumnCount, _matrix.ColumnCount);
        using var stream = new TileStream(_matrix, _options);
        bool fits = true;
        Pass(stream, "summing the Gram matrix", (tile, _, rows) =>
        {
            fits &= stream.LargestPart < LargestForSingle && stream.SmallestScale > SmallestForSingle;
            if (fits)
            {
                _engine.AddGram(tile, rows, gram);
            }
        });
        if (fits)
        {
            return gram;
        }

        gram.Dispose();
        return null;
    }

    private Complex128Matrix DoubleGram()
    {
        var gram = new Complex128Matrix(_matrix.ColumnCount, _matrix.ColumnCount);
        using var stream = new TileStream(_matrix, _options);
        using var wide = new Complex128Matrix(stream.TileRows, _matrix.ColumnCount);
        Pass(stream, "summing the Gram matrix in double precision", (tile, _, rows) =>
        {
            Widen(tile, rows, wide, 0);
            _engine.AddGram(wide, rows, gram);
        });
        return gram;
    }

    // R of [R so far; next tile], again and again. The tile has at least N rows, so that the work is at most doubled.
    private Complex128Matrix TriangularFactor()
    {
        int n = _matrix.ColumnCount;
        SpectrumOptions options = _options with { TileBytes = Math.Max(_options.TileBytes, 8L * n * n) };
        using var stream = new TileStream(_matrix, options);
        using var stack = new Complex128Matrix(n + stream.TileRows, n);
        Pass(stream, "tile-wise QR", (tile, first, rows) =>
        {
            int kept = Math.Min(n, first);
            Widen(tile, rows, stack, kept);
            _engine.TriangularFactor(stack, kept + rows);
        });
        var factor = new Complex128Matrix(Math.Min(n, _matrix.RowCount), n);
        for (int row = 0; row < factor.Rows; row++)
        {
            stack.Row(row).CopyTo(factor.Row(row));
        }

        return factor;
    }

    private void Pass(TileStream stream, string activity, Action<NativeBuffer<Complex64>, int, int> work)
    {
        _passes++;
        stream.Pass(activity, work, _progress, _cancellation);
    }

    private static void Widen(NativeBuffer<Complex64> tile, int rows, Complex128Matrix wide, int firstRow)
    {
        int n = wide.Columns;
        Parallel.For(0, rows, row =>
        {
            ReadOnlySpan<Complex64> from = tile.Slice((long)row * n, n);
            Span<Complex> to = wide.Row(firstRow + row);
            for (int k = 0; k < n; k++)
            {
                to[k] = from[k];
            }
        });
    }
}
