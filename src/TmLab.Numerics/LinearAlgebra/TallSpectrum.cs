using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// Singular values and vectors of a matrix with many more rows than columns (pixels against modes), read in tiles: memory holds
/// two tiles and a few N × N matrices, never a P × P one nor the P × N one. A matrix with fewer rows than columns is transposed
/// in memory and treated the same. Results do not depend on the number of threads, and on the tile size by rounding only.
/// Non-finite elements are refused with <see cref="NonFiniteMatrixException"/>, a decomposition that does not converge ends in
/// <see cref="LinearAlgebraException"/>, a cancelled one in <see cref="OperationCanceledException"/>.
/// </summary>
public static class TallSpectrum
{
    /// <summary>All min(P, N) singular values, without vectors.</summary>
    /// <param name="reader">The matrix, P × N, at least 1 × 1.</param>
    /// <param name="engine">The engine.</param>
    /// <param name="options">Null for the defaults.</param>
    /// <param name="progress">Null for none.</param>
    /// <param name="cancellation">Stops between tiles.</param>
    public static SpectrumOutcome SingularValues(
        IRowBlockReader reader,
        ILinearAlgebraEngine engine,
        SpectrumOptions? options = null,
        IProgress<PassProgress>? progress = null,
        CancellationToken cancellation = default)
    {
        options ??= SpectrumOptions.Default;
        Check(reader, options);
        using AdjointInMemory? turned = Turned(reader, options);
        var ladder = new SpectrumLadder(turned ?? reader, engine, options, progress, cancellation);
        return ladder.Values();
    }

    /// <summary>The <paramref name="count"/> leading singular values and their input vectors, exact up to rounding.</summary>
    /// <param name="reader">The matrix, P × N, at least 1 × 1.</param>
    /// <param name="count">K in [1, min(P, N)].</param>
    /// <param name="engine">The engine.</param>
    /// <param name="options">Null for the defaults.</param>
    /// <param name="progress">Null for none.</param>
    /// <param name="cancellation">Stops between tiles.</param>
    /// <exception cref="ArgumentOutOfRangeException">The count is out of range.</exception>
    public static SingularVectors Vectors(
        IRowBlockReader reader,
        int count,
        ILinearAlgebraEngine engine,
        SpectrumOptions? options = null,
        IProgress<PassProgress>? progress = null,
        CancellationToken cancellation = default)
    {
        options ??= SpectrumOptions.Default;
        Check(reader, options);
        Preconditions.InRange(count, 1, Math.Min(reader.RowCount, reader.ColumnCount));
        using AdjointInMemory? turned = Turned(reader, options);
        var ladder = new SpectrumLadder(turned ?? reader, engine, options, progress, cancellation);
        (SpectrumOutcome spectrum, Complex128Matrix adjoint) = ladder.Vectors(count);
        using (adjoint)
        {
            return Finish(spectrum, adjoint, turned, engine, options, progress, cancellation);
        }
    }

    /// <summary>
    /// The <paramref name="count"/> leading singular values and their input vectors where that is cheaper than all: by a randomised
    /// block Krylov iteration, each value with an error bound, or from the Gram matrix where that needs less arithmetic
    /// (<see cref="SpectrumOptions.PreferGramWhenCheaper"/>).
    /// </summary>
    /// <inheritdoc cref="Vectors" path="/param|/exception"/>
    public static SingularVectors Leading(
        IRowBlockReader reader,
        int count,
        ILinearAlgebraEngine engine,
        SpectrumOptions? options = null,
        IProgress<PassProgress>? progress = null,
        CancellationToken cancellation = default)
    {
        options ??= SpectrumOptions.Default;
        Check(reader, options);
        Preconditions.InRange(count, 1, Math.Min(reader.RowCount, reader.ColumnCount));
        Preconditions.InRange(options.Oversampling, 2, int.MaxValue);
        Preconditions.InRange(options.MaximumPasses, 2, int.MaxValue);
        if (GramIsCheaper(Math.Min(reader.RowCount, reader.ColumnCount), count, options))
        {
            return Vectors(reader, count, engine, options, progress, cancellation);
        }

        using AdjointInMemory? turned = Turned(reader, options);
        using var krylov = new KrylovSearch(turned ?? reader, count, engine, options, progress, cancellation);
        (SpectrumOutcome spectrum, Complex128Matrix adjoint) = krylov.Run();
        using (adjoint)
        {
            return Finish(spectrum, adjoint, turned, engine, options, progress, cancellation);
        }
    }

    /// <summary>
    /// Writes the output vectors U = A V Σ⁻¹ (P × K) in one more pass. Columns of values lost in rounding (below 10⁻⁶ of the largest)
    /// are written as zeros: their direction is not known. The others are orthonormal to about u σ₁/σ_j, u = 6·10⁻⁸.
    /// </summary>
    /// <param name="reader">The matrix that the vectors belong to.</param>
    /// <param name="vectors">What <see cref="Vectors"/> or <see cref="Leading"/> gave.</param>
    /// <param name="writer">Takes rows of K elements.</param>
    /// <param name="engine">The engine.</param>
    /// <param name="options">Null for the defaults.</param>
    /// <param name="progress">Null for none.</param>
    /// <param name="cancellation">Stops between tiles.</param>
    /// <exception cref="ArgumentException">The vectors are of another number of columns.</exception>
    public static OutputVectorCheck WriteOutputVectors(
        IRowBlockReader reader,
        SingularVectors vectors,
        IRowBlockWriter writer,
        ILinearAlgebraEngine engine,
        SpectrumOptions? options = null,
        IProgress<PassProgress>? progress = null,
        CancellationToken cancellation = default)
    {
        options ??= SpectrumOptions.Default;
        Check(reader, options);
        Preconditions.SameLength(vectors.InputVectors.Rows, reader.ColumnCount);
        using var pass = new OutputVectorPass(reader, vectors.InputVectors, [.. vectors.Spectrum.SingularValues], engine, options);
        return pass.Run(writer, progress, cancellation);
    }

    // Real operations a row: 4 N² for half a Gram matrix; 16 N l for a product by l columns and back.
    private static bool GramIsCheaper(int size, int count, SpectrumOptions options) =>
        count + options.Oversampling >= size
        || (options.PreferGramWhenCheaper && size <= 4L * (count + options.Oversampling) * options.MaximumPasses);

    private static void Check(IRowBlockReader reader, SpectrumOptions options)
    {
        Preconditions.InRange(reader.RowCount, 1, int.MaxValue);
        Preconditions.InRange(reader.ColumnCount, 1, int.MaxValue);
        Preconditions.InRange(options.TileBytes, 1, long.MaxValue);
        Preconditions.InRange(options.RelativeAccuracy, 0.0, 1.0);
    }

    private static AdjointInMemory? Turned(IRowBlockReader reader, SpectrumOptions options) =>
        reader.RowCount < reader.ColumnCount ? new AdjointInMemory(reader, options) : null;

    // For a turned matrix A† = V Σ U† the vectors found are U; one pass over it in memory gives V.
    private static SingularVectors Finish(
        SpectrumOutcome spectrum,
        Complex128Matrix adjoint,
        AdjointInMemory? turned,
        ILinearAlgebraEngine engine,
        SpectrumOptions options,
        IProgress<PassProgress>? progress,
        CancellationToken cancellation)
    {
        ComplexMatrix found = VectorPhase.FromAdjoint(adjoint);
        if (turned is null)
        {
            VectorPhase.Fix(found);
            return new SingularVectors(spectrum, found);
        }

        using (found)
        {
            var input = new ComplexMatrix(turned.RowCount, found.Columns);
            using var pass = new OutputVectorPass(turned, found, [.. spectrum.SingularValues], engine, options);
            _ = pass.Run(new MatrixWriter(input), progress, cancellation);
            VectorPhase.Fix(input);
            return new SingularVectors(spectrum, input);
        }
    }

    private sealed class MatrixWriter(ComplexMatrix matrix) : IRowBlockWriter
    {
        public void WriteRows(int firstRow, ReadOnlySpan<Complex64> source) =>
            source.CopyTo(matrix.RowBlock(firstRow, source.Length / matrix.Columns));
    }
}
