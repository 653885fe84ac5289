using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Theory;

namespace TmLab.Channels;

/// <summary>
/// The channels of a transmission matrix: T = U Σ V† over its valid rows and columns. Sizes are known from the start, so that the
/// caller can make room for the vectors before <see cref="Run"/> fills it.
/// </summary>
public sealed class ChannelAnalysis
{
    private readonly TransmissionMatrixFacts _facts;
    private readonly ChannelSettings _settings;
    private readonly ILinearAlgebraEngine _engine;
    private readonly ValidRows _rows;
    private readonly string _file;

    /// <summary>Prepares the decomposition.</summary>
    /// <param name="matrix">The matrix.</param>
    /// <param name="facts">Its facts.</param>
    /// <param name="file">The matrix file's name, for messages.</param>
    /// <param name="settings">How many channels.</param>
    /// <param name="engine">The linear-algebra engine.</param>
    /// <exception cref="BadInputException">Too few rows or columns are valid.</exception>
    public ChannelAnalysis(
        IRowBlockReader matrix, TransmissionMatrixFacts facts, string file, ChannelSettings settings, ILinearAlgebraEngine engine)
    {
        (_facts, _settings, _engine, _file) = (facts, settings, engine, file);
        _rows = new ValidRows(matrix, facts.Pixels.Valid, facts.Modes.Valid);
        if (Math.Min(_rows.ColumnCount, _rows.RowCount) < settings.FewestModes)
        {
            throw new BadInputException(
                file,
                "/modes/valid and /pixels/valid",
                FormattableString.Invariant($"{_rows.ColumnCount} modes and {_rows.RowCount} pixels are valid, which is too few for a spectrum"),
                FormattableString.Invariant($"measure with at least {settings.FewestModes} of each"));
        }
    }

    /// <summary>Rows that take part.</summary>
    public int PixelCount => _rows.RowCount;

    /// <summary>Columns that take part.</summary>
    public int ModeCount => _rows.ColumnCount;

    /// <summary>Channels whose vectors will be found; 0 for singular values only.</summary>
    public int ChannelCount => Math.Min(_settings.Leading ?? int.MaxValue, Math.Min(PixelCount, ModeCount));

    /// <summary>Decomposes.</summary>
    /// <param name="inputModes">Takes V, rows = modes that take part, columns = channels; not used for values only.</param>
    /// <param name="outputModes">Takes U, rows = pixels that take part, columns = channels; not used for values only.</param>
    /// <param name="progress">Hears of the passes over the matrix.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="BadInputException">The matrix holds NaN or infinity.</exception>
    /// <exception cref="NumericalException">The decomposition did not converge.</exception>
    public ChannelFacts Run(
        IRowBlockWriter? inputModes, IRowBlockWriter? outputModes, IProgress<StageProgress>? progress, CancellationToken cancel)
    {
        try
        {
            var passes = progress is null ? null : new PassToStage(progress);
            var options = SpectrumOptions.Default with { TileBytes = _settings.TileBytes };
            return ChannelCount == 0 || inputModes is null || outputModes is null
                ? Facts(TallSpectrum.SingularValues(_rows, _engine, options, passes, cancel), 0, double.NaN)
                : WithVectors(inputModes, outputModes, options, passes, cancel);
        }
        catch (NonFiniteMatrixException failure)
        {
            throw new BadInputException(
                _file,
                FormattableString.Invariant($"/matrix, pixel {_rows.Rows[(int)failure.Row]}, mode {_rows.Columns[(int)failure.Column]}"),
                "is not a finite number",
                "reconstruct the matrix again",
                failure);
        }
        catch (LinearAlgebraException failure)
        {
            throw new NumericalException(failure.Message, "try the other engine (--engine managed or native)", failure);
        }
    }

    private ChannelFacts WithVectors(
        IRowBlockWriter inputModes, IRowBlockWriter outputModes, SpectrumOptions options, PassToStage? passes, CancellationToken cancel)
    {
        bool all = ChannelCount == Math.Min(PixelCount, ModeCount);
        using SingularVectors vectors = all
            ? TallSpectrum.Vectors(_rows, ChannelCount, _engine, options, passes, cancel)
            : TallSpectrum.Leading(_rows, ChannelCount, _engine, options, passes, cancel);
        inputModes.WriteRows(0, vectors.InputVectors.RowBlock(0, vectors.InputVectors.Rows));
        OutputVectorCheck check = TallSpectrum.WriteOutputVectors(_rows, vectors, outputModes, _engine, options, passes, cancel);
        return Facts(vectors.Spectrum, ChannelCount, check.DiagonalError);
    }

    private ChannelFacts Facts(SpectrumOutcome spectrum, int channels, double diagonalError) => new(
        _facts.Title,
        _facts.WavelengthNm,
        _facts.CameraRegion,
        _facts.Grid,
        [.. _rows.Rows.Select(p => _facts.Pixels.Y[p])],
        [.. _rows.Rows.Select(p => _facts.Pixels.X[p])],
        _rows.Columns,
        spectrum.SingularValues,
        channels,
        Participation(spectrum.SingularValues),
        Compare(spectrum.SingularValues),
        spectrum.Description,
        _engine.Description,
        diagonalError,
        [.. Warnings(spectrum)]);

    private IEnumerable<string> Warnings(SpectrumOutcome spectrum)
    {
        if (spectrum.SingularValues.Length < Math.Min(PixelCount, ModeCount))
        {
            yield return "Only the leading singular values are known: participation number and Marchenko–Pastur comparison need all of them.";
        }

        foreach (string warning in _facts.Quality.Warnings)
        {
            yield return warning;
        }
    }

    // (Σσ²)²/Σσ⁴, by the largest first so that fourth powers stay in range.
    private double Participation(ImmutableArray<double> values)
    {
        if (values.Length < Math.Min(PixelCount, ModeCount))
        {
            return double.NaN;
        }

        double[] tau = [.. values.Select(s => s / values[0] * (s / values[0]))];
        return tau.Sum() * tau.Sum() / tau.Sum(t => t * t);
    }

    private MarchenkoPasturComparison? Compare(ImmutableArray<double> values)
    {
        if (values.Length < Math.Min(PixelCount, ModeCount))
        {
            return null;
        }

        var found = SpectrumAgainstMarchenkoPastur.Compare(values, PixelCount, ModeCount);
        return new MarchenkoPasturComparison(
            found.Law.AspectRatio,
            found.Law.LowerEdge,
            found.Law.UpperEdge,
            found.Probability,
            found.PredictedQuantile,
            found.MeasuredQuantile,
            found.Distance,
            found.IsCompatible);
    }

    /// <summary>Passes over the matrix as progress of the stage.</summary>
    private sealed class PassToStage(IProgress<StageProgress> target) : IProgress<PassProgress>
    {
        public void Report(PassProgress value) =>
            target.Report(new StageProgress(value.Activity, value.RowsDone, value.RowsTotal, "pixels"));
    }
}
