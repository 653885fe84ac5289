using System.Numerics;
using CsCheck;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

public sealed class TallSpectrumTests
{
    private const double SingleRoundoff = 6e-8;

    // Tiles of a few rows, so that small matrices have many.
    private static readonly SpectrumOptions s_smallTiles = new() { TileBytes = 2000 };

    public static TheoryData<EngineChoice> Choices => [EngineChoice.Managed, EngineChoice.Native];

    [Theory]
    [MemberData(nameof(Choices))]
    public void A_known_spectrum_is_found(EngineChoice choice)
    {
        double[] expected = [.. Enumerable.Range(0, 24).Select(k => 10.0 - (0.35 * k))];
        InMemoryMatrix matrix = Dense.Reader(Dense.WithSpectrum(300, expected, 31));
        SpectrumOutcome outcome = Tall.Values(matrix, Engines.Get(choice), s_smallTiles);
        Assert.Equal(SpectrumMethod.Gram, outcome.Method);
        Assert.Equal(300, matrix.RowsRead);
        Assert.Equal(expected[0] / expected[^1], outcome.ConditionEstimate, 1e-5);

        // Gram route in single precision, Σ of 300 products: |δσ| ≤ a few u σ₁²/σ.
        AssertNear(expected, outcome.SingularValues, s => 4 * SingleRoundoff * expected[0] * expected[0] / s);
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void A_larger_condition_number_takes_a_more_exact_route(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        foreach ((double smallest, SpectrumMethod method) in (ReadOnlySpan<(double, SpectrumMethod)>)[(0.5, SpectrumMethod.Gram), (1e-3, SpectrumMethod.DoubleGram), (0, SpectrumMethod.TallSkinnyQr)])
        {
            // The last column is a multiple of the first: then a value is 0 in single precision too.
            Complex[,] a = Dense.WithSpectrum(200, [1, 0.9, 0.8, 0.7, Math.Max(smallest, 0.6)], 32);
            for (int row = 0; row < 200; row++)
            {
                a[row, 4] = smallest == 0 ? 2 * a[row, 0] : a[row, 4] * (smallest == 0.5 ? 1 : smallest);
            }

            SpectrumOutcome outcome = Tall.Values(Dense.Reader(a), engine, s_smallTiles);
            Assert.Equal(method, outcome.Method);
            Assert.Equal(1 + (int)method, outcome.Passes);
            Assert.Equal(method == SpectrumMethod.TallSkinnyQr, outcome.SingularValues[^1] < 1e-14);
        }
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void Both_orientations_have_the_same_spectrum(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] a = Dense.Random(90, 20, 33);
        SpectrumOutcome tall = Tall.Values(Dense.Reader(a), engine, s_smallTiles);
        SpectrumOutcome wide = Tall.Values(Dense.Reader(Dense.Adjoint(a)), engine, s_smallTiles);
        AssertNear(tall.SingularValues, wide.SingularValues, _ => 1e-5 * tall.SingularValues[0]);
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void Vectors_of_every_shape_diagonalise_the_matrix(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        foreach ((int rows, int columns, int count) in (ReadOnlySpan<(int, int, int)>)[(1, 1, 1), (1, 7, 1), (7, 1, 1), (150, 12, 12), (150, 12, 3), (12, 150, 12), (12, 150, 4), (40, 40, 40)])
        {
            Complex[,] a = Dense.Random(rows, columns, 34);
            InMemoryMatrix matrix = Dense.Reader(a);
            using SingularVectors vectors = Tall.Vectors(matrix, count, engine, s_smallTiles);
            var u = new InMemoryMatrix(rows, count);
            OutputVectorCheck check = Tall.Write(matrix, vectors, u, engine, s_smallTiles);

            // u σ₁/σ_j times a few; the check and the plain product agree on it.
            double bound = 40 * SingleRoundoff * vectors.Spectrum.ConditionEstimate;
            Assert.True(check.OrthonormalityError <= bound, $"{rows} × {columns}: {check}");
            double found = DiagonalError(a, u, vectors);
            Assert.True(found <= bound, $"{rows} × {columns}: {found}");
            Assert.Equal(check.DiagonalError, found, 20 * SingleRoundoff);
        }
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void Output_vectors_of_lost_values_are_zero(EngineChoice choice)
    {
        Complex[,] a = Dense.Random(50, 4, 35);
        for (int row = 0; row < 50; row++)
        {
            a[row, 3] = a[row, 0];
        }

        InMemoryMatrix matrix = Dense.Reader(a);
        ILinearAlgebraEngine engine = Engines.Get(choice);
        using SingularVectors vectors = Tall.Vectors(matrix, 4, engine, s_smallTiles);
        var u = new InMemoryMatrix(50, 4);
        OutputVectorCheck check = Tall.Write(matrix, vectors, u, engine, s_smallTiles);
        Assert.True(check.OrthonormalityError < 1e-5, $"{check}");
        Assert.All(Enumerable.Range(0, 50), row => Assert.Equal(default, u.Row(row)[3]));
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void The_anchor_element_of_each_input_vector_is_real_and_positive(EngineChoice choice)
    {
        foreach ((int rows, int columns) in (ReadOnlySpan<(int, int)>)[(60, 9), (9, 60)])
        {
            using SingularVectors vectors = Tall.Vectors(Dense.Reader(Dense.Random(rows, columns, 36)), 9, Engines.Get(choice), s_smallTiles);
            for (int column = 0; column < 9; column++)
            {
                Complex64[] v = [.. Enumerable.Range(0, columns).Select(row => vectors.InputVectors[row, column])];
                float largest = v.Max(z => z.SquaredMagnitude);
                Complex64 anchor = v.First(z => z.SquaredMagnitude >= (1 - 1e-5f) * largest);
                Assert.True(anchor.r > 0 && Math.Abs(anchor.i) <= SingleRoundoff * anchor.r);
            }
        }
    }

    // A matrix whose right vectors have elements of one size (as a Hadamard matrix' do): the tie goes to the first element.
    [Theory]
    [MemberData(nameof(Choices))]
    public void A_tie_of_magnitudes_goes_to_the_lowest_index(EngineChoice choice)
    {
        var a = new Complex[8, 4];
        for (int row = 0; row < 4; row++)
        {
            for (int column = 0; column < 4; column++)
            {
                a[row, column] = (8 - row) * ((BitOperations.PopCount((uint)(row & column)) % 2 == 0) ? Complex.ImaginaryOne : -Complex.ImaginaryOne);
            }
        }

        using SingularVectors vectors = Tall.Vectors(Dense.Reader(a), 4, Engines.Get(choice));
        Assert.All(Enumerable.Range(0, 4), column => Assert.Equal(0.5, vectors.InputVectors[0, column].r, 1e-5));
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void Tile_size_changes_results_by_rounding_only(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        InMemoryMatrix matrix = Dense.Reader(Dense.Random(120, 10, 37));
        SpectrumOutcome whole = Tall.Values(matrix, engine);
        Gen.Long[1, 20_000].Sample(
            bytes =>
            {
                SpectrumOutcome tiled = Tall.Values(matrix, engine, new SpectrumOptions { TileBytes = bytes });
                AssertNear(whole.SingularValues, tiled.SingularValues, _ => 10 * SingleRoundoff * whole.SingularValues[0]);
                using SingularVectors vectors = Tall.Vectors(matrix, 10, engine, new SpectrumOptions { TileBytes = bytes, RelativeAccuracy = 0 });
                Assert.Equal(SpectrumMethod.TallSkinnyQr, vectors.Spectrum.Method);
                AssertNear(whole.SingularValues, vectors.Spectrum.SingularValues, _ => 10 * SingleRoundoff * whole.SingularValues[0]);
            },
            iter: 20,
            seed: "0001Pq3ZtG8g");
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void Both_engines_agree(EngineChoice choice)
    {
        InMemoryMatrix matrix = Dense.Reader(Dense.Random(400, 50, 38));
        using SingularVectors managed = Tall.Vectors(matrix, 50, Engines.Get(EngineChoice.Managed), s_smallTiles);
        using SingularVectors other = Tall.Vectors(matrix, 50, Engines.Get(choice), s_smallTiles);
        AssertNear(managed.Spectrum.SingularValues, other.Spectrum.SingularValues, _ => 10 * SingleRoundoff * managed.Spectrum.SingularValues[0]);

        // Vectors of gap g differ by the matrices' rounding over it, u σ₁²/g.
        for (int j = 0; j < 50; j++)
        {
            double gap = Enumerable.Range(0, 50).Where(k => k != j).Min(k => Math.Abs(Square(managed, k) - Square(managed, j)));
            double allowed = 20 * SingleRoundoff * Square(managed, 0) / gap;
            for (int row = 0; row < 50; row++)
            {
                Complex difference = (Complex)managed.InputVectors[row, j] - other.InputVectors[row, j];
                Assert.True(difference.Magnitude <= allowed, $"vector {j}: {difference.Magnitude} > {allowed}");
            }
        }
    }

    // A second run takes the threads in another order; the bits stay.
    [Theory]
    [MemberData(nameof(Choices))]
    public void A_second_run_gives_the_same_bits(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        InMemoryMatrix matrix = Dense.Reader(Dense.Random(700, 140, 39));
        using SingularVectors first = Tall.Vectors(matrix, 140, engine, s_smallTiles);
        using SingularVectors second = Tall.Vectors(matrix, 140, engine, s_smallTiles);
        Assert.Equal(first.Spectrum.SingularValues, second.Spectrum.SingularValues);
        Assert.True(first.InputVectors.Buffer.AsSpan().SequenceEqual(second.InputVectors.Buffer.AsSpan()));
    }

    [Theory]
    [InlineData(1e-25f)]
    [InlineData(1e-12f)]
    [InlineData(1e12f)]
    [InlineData(1e25f)]
    public void Any_unit_gives_the_same_relative_spectrum(float unit)
    {
        Complex[,] a = Dense.Random(200, 8, 40);
        ILinearAlgebraEngine engine = Engines.Get(EngineChoice.Auto);
        SpectrumOutcome plain = Tall.Values(Dense.Reader(a), engine);
        SpectrumOutcome scaled = Tall.Values(Dense.Reader(Dense.Product(a, Dense.Diagonal([.. Enumerable.Repeat((double)unit, 8)]))), engine);
        AssertNear(plain.SingularValues, scaled.SingularValues.Select(s => s / unit).ToArray(), _ => 10 * SingleRoundoff * plain.SingularValues[0]);
    }

    [Theory]
    [MemberData(nameof(Choices))]
    public void A_zero_matrix_has_zero_singular_values(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        var matrix = new InMemoryMatrix(30, 5);
        Assert.All(Tall.Values(matrix, engine).SingularValues, s => Assert.Equal(0, s));
        using SingularVectors leading = Tall.Leading(matrix, 2, engine, new SpectrumOptions { PreferGramWhenCheaper = false, Oversampling = 2 });
        Assert.All(leading.Spectrum.SingularValues, s => Assert.Equal(0, s));
    }

    [Fact]
    public void NaN_is_refused_with_its_place_before_the_library_sees_it()
    {
        InMemoryMatrix matrix = Dense.Reader(Dense.Random(100, 6, 41));
        matrix.Row(57)[4] = new Complex64(1, float.NaN);
        NonFiniteMatrixException found = Assert.Throws<NonFiniteMatrixException>(
            () => Tall.Values(matrix, Engines.Get(EngineChoice.Auto), s_smallTiles));
        Assert.Equal((57, 4), (found.Row, found.Column));
    }

    [Fact]
    public void Progress_reaches_the_end_and_cancellation_stops()
    {
        InMemoryMatrix matrix = Dense.Reader(Dense.Random(100, 6, 42));
        var reports = new Reports();
        ILinearAlgebraEngine engine = Engines.Get(EngineChoice.Managed);
        TallSpectrum.SingularValues(matrix, engine, s_smallTiles, reports, TestContext.Current.CancellationToken);
        Assert.Equal(new PassProgress("summing the Gram matrix", 100, 100), reports.Seen[^1]);
        Assert.Equal(3, reports.Seen.Count);
        Assert.Throws<OperationCanceledException>(
            () => TallSpectrum.SingularValues(matrix, engine, s_smallTiles, null, new CancellationToken(canceled: true)));
    }

    [Fact]
    public void A_failing_reader_ends_the_pass_with_its_own_exception()
    {
        Assert.Throws<IOException>(() => Tall.Values(new FailingReader(), Engines.Get(EngineChoice.Managed), s_smallTiles));
    }

    private static double Square(SingularVectors vectors, int k) => vectors.Spectrum.SingularValues[k] * vectors.Spectrum.SingularValues[k];

    private static double DiagonalError(Complex[,] a, InMemoryMatrix u, SingularVectors vectors)
    {
        var left = new Complex[u.RowCount, u.ColumnCount];
        for (int row = 0; row < u.RowCount; row++)
        {
            for (int column = 0; column < u.ColumnCount; column++)
            {
                left[row, column] = u.Row(row)[column];
            }
        }

        Complex[,] v = Dense.From(vectors.InputVectors.Buffer, vectors.InputVectors.Rows, vectors.InputVectors.Columns);
        Complex[,] diagonal = Dense.Product(Dense.Product(Dense.Adjoint(left), a), v);
        return Dense.LargestDifference(Dense.Diagonal(vectors.Spectrum.SingularValues), diagonal) / vectors.Spectrum.SingularValues[0];
    }

    private static void AssertNear(IReadOnlyList<double> expected, IReadOnlyList<double> found, Func<double, double> tolerance)
    {
        Assert.Equal(expected.Count, found.Count);
        for (int k = 0; k < expected.Count; k++)
        {
            Assert.True(Math.Abs(expected[k] - found[k]) <= tolerance(expected[k]), $"{k}: expected {expected[k]}, found {found[k]}");
        }
    }

    private sealed class Reports : IProgress<PassProgress>
    {
        public List<PassProgress> Seen { get; } = [];

        public void Report(PassProgress value) => Seen.Add(value);
    }

    private sealed class FailingReader : IRowBlockReader
    {
        public int RowCount => 1000;

        public int ColumnCount => 6;

        public void ReadRows(int firstRow, int rowCount, Span<Complex64> destination)
        {
            if (firstRow > 500)
            {
                throw new IOException("The disk is gone.");
            }
        }
    }
}
