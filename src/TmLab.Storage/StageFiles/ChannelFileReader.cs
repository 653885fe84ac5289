using TmLab.Channels;
using TmLab.Failures;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Reads a channel stage file: vectors in blocks of rows, in bounded memory, from several threads at once.</summary>
public sealed class ChannelFileReader : IDisposable
{
    internal const string InputModesPath = "/input_modes";
    internal const string OutputModesPath = "/output_modes";

    private readonly StageFileReader _file;
    private readonly Lazy<ChannelFacts> _facts;

    /// <summary>Opens a file.</summary>
    /// <exception cref="BadInputException">The file is missing, damaged or no channel file.</exception>
    public ChannelFileReader(string path)
    {
        _file = StageFileReader.Open(path, StageFormat.Channels);
        try
        {
            if (_file.Has(InputModesPath))
            {
                InputModes = new StoredRows(_file, InputModesPath);
                OutputModes = new StoredRows(_file, OutputModesPath);
                RequireSameChannels(InputModes.ColumnCount, OutputModes.ColumnCount);
            }

            _facts = new Lazy<ChannelFacts>(ReadFacts);
        }
        catch
        {
            _file.Dispose();
            throw;
        }
    }

    /// <summary>The input modes V, rows = macro-pixels that took part, columns = channels; null when the file holds values only.</summary>
    public IRowBlockReader? InputModes { get; }

    /// <summary>The output modes U, rows = pixels that took part, columns = channels; null when the file holds values only.</summary>
    public IRowBlockReader? OutputModes { get; }

    /// <summary>Everything besides the vectors; read when first asked for.</summary>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public ChannelFacts Facts => _facts.Value;

    /// <summary>Where the file comes from.</summary>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public StageProvenance Provenance => _file.Provenance();

    /// <summary>Compares all vectors with the checksums in the file. Files rewritten without checksums pass.</summary>
    /// <exception cref="BadInputException">A block differs.</exception>
    /// <exception cref="OperationCanceledException">It was stopped.</exception>
    public void Verify(IProgress<StageProgress>? progress = null, CancellationToken cancel = default) =>
        _file.Verify([InputModesPath, OutputModesPath], progress, cancel);

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private void RequireSameChannels(int input, int output)
    {
        if (input != output)
        {
            throw DamagedFiles.Damaged(_file.Path, OutputModesPath, $"has {output} channels, {InputModesPath} {input}");
        }
    }

    private ChannelFacts ReadFacts()
    {
        const string group = "/spectrum";
        int[] y = _file.ReadArray<int>("/pixels/y", OutputModes?.RowCount ?? -1);
        return new ChannelFacts(
            GeometryGroup.ReadTitle(_file),
            GeometryGroup.ReadWavelengthNm(_file),
            GeometryGroup.ReadCameraRegion(_file),
            GeometryGroup.ReadGrid(_file),
            [.. y],
            [.. _file.ReadArray<int>("/pixels/x", y.Length)],
            [.. _file.ReadArray<int>("/modes/index", InputModes?.RowCount ?? -1)],
            [.. _file.ReadArray<double>("/singular_values", -1)],
            InputModes?.ColumnCount ?? 0,
            _file.Attribute<double>(group, "participation_number"),
            ReadMarchenkoPastur(),
            _file.Text(group, "method"),
            _file.Text(group, "engine"),
            _file.Attribute<double>(group, "diagonal_error"),
            _file.Lines(group, "warnings"));
    }

    private MarchenkoPasturComparison? ReadMarchenkoPastur()
    {
        const string law = "/spectrum/marchenko_pastur";
        if (!_file.Has(law))
        {
            return null;
        }

        double[] probability = _file.ReadArray<double>(law + "/probability", -1);
        return new MarchenkoPasturComparison(
            _file.Attribute<double>(law, "aspect_ratio"),
            _file.Attribute<double>(law, "lower_edge"),
            _file.Attribute<double>(law, "upper_edge"),
            [.. probability],
            [.. _file.ReadArray<double>(law + "/predicted_quantile", probability.Length)],
            [.. _file.ReadArray<double>(law + "/measured_quantile", probability.Length)],
            _file.Attribute<double>(law, "distance"),
            _file.Attribute<int>(law, "compatible") != 0);
    }
}
