using System.Collections.Immutable;
using TmLab.Channels;
using TmLab.Failures;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>
/// Writes a channel stage file: both sets of vectors in rows, in any order and from several threads; the file appears under its
/// name on <see cref="Complete"/>.
/// </summary>
public sealed class ChannelFileWriter : IDisposable
{
    private readonly StageFileWriter _file;
    private readonly ReservedRows? _inputModes;
    private readonly ReservedRows? _outputModes;
    private readonly int _pixelCount;
    private readonly int _modeCount;
    private readonly int _channelCount;

    /// <summary>Begins a file.</summary>
    /// <param name="path">Its final name.</param>
    /// <param name="overwrite">Whether a file of that name may be replaced.</param>
    /// <param name="provenance">Where it comes from.</param>
    /// <param name="pixelCount">Number of pixels that took part, ≥ 1: rows of the output modes.</param>
    /// <param name="modeCount">Number of macro-pixels that took part, ≥ 1: rows of the input modes.</param>
    /// <param name="channelCount">Number of channels whose vectors are stored; 0 for singular values only.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to, or the disk has no room for the vectors.</exception>
    public ChannelFileWriter(
        string path, bool overwrite, StageProvenance provenance, int pixelCount, int modeCount, int channelCount)
    {
        Preconditions.InRange(pixelCount, 1, int.MaxValue);
        Preconditions.InRange(modeCount, 1, int.MaxValue);
        Preconditions.InRange(channelCount, 0, Math.Min(pixelCount, modeCount));
        (_pixelCount, _modeCount, _channelCount) = (pixelCount, modeCount, channelCount);
        if (channelCount > 0)
        {
            _outputModes = new ReservedRows(ChannelFileReader.OutputModesPath, "1", pixelCount, channelCount);
            _inputModes = new ReservedRows(ChannelFileReader.InputModesPath, "1", modeCount, channelCount);
        }

        ImmutableArray<ReservedDataset<Complex64>> reserved =
            _outputModes is null || _inputModes is null ? [] : [_outputModes.Dataset, _inputModes.Dataset];
        _file = StageFileWriter.Begin(path, overwrite, StageFormat.Channels, provenance, [.. reserved]);
        foreach (ReservedDataset<Complex64> dataset in reserved)
        {
            _file.Attach(dataset);
        }
    }

    /// <summary>Takes the input modes V, rows = macro-pixels that took part, columns = channels.</summary>
    /// <exception cref="InvalidOperationException">The file holds values only.</exception>
    public IRowBlockWriter InputModes => _inputModes ?? throw ValuesOnly();

    /// <summary>Takes the output modes U, rows = pixels that took part, columns = channels.</summary>
    /// <exception cref="InvalidOperationException">The file holds values only.</exception>
    public IRowBlockWriter OutputModes => _outputModes ?? throw ValuesOnly();

    /// <summary>Takes the facts; after that the file is whole.</summary>
    /// <exception cref="OutputException">The disk is full or fails, or reading back gave something else.</exception>
    /// <exception cref="InvalidOperationException">A row of a vector has not been written.</exception>
    /// <exception cref="ArgumentException">The facts do not fit the vectors.</exception>
    public void Complete(ChannelFacts facts)
    {
        Preconditions.SameLength(facts.Y.Length, _pixelCount);
        Preconditions.SameLength(facts.X.Length, _pixelCount);
        Preconditions.SameLength(facts.Mode.Length, _modeCount);
        Preconditions.SameLength(facts.ChannelCount, _channelCount);
        GeometryGroup.WriteTitle(_file, facts.Title, facts.WavelengthNm);
        GeometryGroup.WriteSizes(_file, facts.CameraRegion, facts.Grid);
        _file.Add("/pixels/y", facts.Y.ToArray(), "pixel");
        _file.Add("/pixels/x", facts.X.ToArray(), "pixel");
        _file.Add("/modes/index", facts.Mode.ToArray(), "1");
        _file.Add("/singular_values", facts.SingularValues.ToArray(), "sqrt(count)");
        WriteSpectrum(facts);
        _file.Complete();
    }

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private static InvalidOperationException ValuesOnly() => new("The file was begun without vectors.");

    private void WriteSpectrum(ChannelFacts facts)
    {
        const string group = "/spectrum";
        _file.AddAttribute(group, "participation_number", facts.ParticipationNumber);
        _file.AddAttribute(group, "method", facts.Method);
        _file.AddAttribute(group, "engine", facts.Engine);
        _file.AddAttribute(group, "diagonal_error", facts.DiagonalError);
        _file.AddLines(group, "warnings", facts.Warnings);

        const string law = group + "/marchenko_pastur";
        if (facts.MarchenkoPastur is not MarchenkoPasturComparison comparison)
        {
            return;
        }

        _file.AddAttribute(law, "aspect_ratio", comparison.AspectRatio);
        _file.AddAttribute(law, "lower_edge", comparison.LowerEdge);
        _file.AddAttribute(law, "upper_edge", comparison.UpperEdge);
        _file.AddAttribute(law, "distance", comparison.Distance);
        _file.AddAttribute(law, "compatible", comparison.IsCompatible ? 1 : 0);
        _file.Add(law + "/probability", comparison.Probability.ToArray(), "1");
        _file.Add(law + "/predicted_quantile", comparison.PredictedQuantile.ToArray(), "1");
        _file.Add(law + "/measured_quantile", comparison.MeasuredQuantile.ToArray(), "1");
    }
}
