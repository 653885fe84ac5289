using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>
/// Reads a transmission-matrix stage file: rows in blocks, in bounded memory, from several threads at once. Opening reads headers
/// only; the facts are read when they are first asked for.
/// </summary>
public sealed class MatrixFileReader : IRowBlockReader, IDisposable
{
    internal const string Matrix = "/matrix";

    private readonly StageFileReader _file;
    private readonly StoredRows _rows;
    private readonly Lazy<TransmissionMatrixFacts> _facts;

    /// <summary>Opens a file.</summary>
    /// <exception cref="BadInputException">The file is missing, damaged or no matrix file.</exception>
    public MatrixFileReader(string path)
    {
        _file = StageFileReader.Open(path, StageFormat.Matrix);
        try
        {
            _rows = new StoredRows(_file, Matrix);
            _facts = new Lazy<TransmissionMatrixFacts>(ReadFacts);
        }
        catch
        {
            _file.Dispose();
            throw;
        }
    }

    /// <inheritdoc/>
    public int RowCount => _rows.RowCount;

    /// <inheritdoc/>
    public int ColumnCount => _rows.ColumnCount;

    /// <summary>Everything besides the elements; read when first asked for.</summary>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public TransmissionMatrixFacts Facts => _facts.Value;

    /// <summary>
    /// A CRC-32 that tells this file from others, as it covers headers and the checksums of the data; null for files rewritten by another
    /// program. Unlike a digest of all bytes it costs nothing.
    /// </summary>
    public uint? Seal => _file.Seal;

    /// <summary>Where the file comes from.</summary>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public StageProvenance Provenance => _file.Provenance();

    /// <inheritdoc/>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public void ReadRows(int firstRow, int rowCount, Span<Complex64> destination) => _rows.ReadRows(firstRow, rowCount, destination);

    /// <summary>Compares all elements with the checksums in the file. Files rewritten without checksums pass.</summary>
    /// <exception cref="BadInputException">A block differs.</exception>
    /// <exception cref="OperationCanceledException">It was stopped.</exception>
    public void Verify(IProgress<StageProgress>? progress = null, CancellationToken cancel = default) =>
        _file.Verify([Matrix], progress, cancel);

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private TransmissionMatrixFacts ReadFacts() => new(
        GeometryGroup.ReadTitle(_file),
        GeometryGroup.ReadWavelengthNm(_file),
        GeometryGroup.ReadCameraRegion(_file),
        GeometryGroup.ReadGrid(_file),
        GeometryGroup.ReadModulator(_file),
        GeometryGroup.ReadLut(_file),
        GeometryGroup.ReadFlatness(_file),
        new PixelFacts(
            [.. _file.ReadArray<int>("/pixels/y", RowCount)],
            [.. _file.ReadArray<int>("/pixels/x", RowCount)],
            Flags("/pixels/valid", RowCount),
            [.. _file.ReadArray<float>("/pixels/visibility", RowCount)],
            [.. _file.ReadArray<float>("/pixels/noise_rms", RowCount)])
        {
            Reason = ReadReasons(),
        },
        new ModeFacts(Flags("/modes/valid", ColumnCount), [.. _file.ReadArray<float>("/modes/noise_rms", ColumnCount)]),
        ReadDrift(),
        ReadQuality());

    private DriftFacts ReadDrift()
    {
        double[] times = _file.ReadArray<double>("/drift/tracker_time_s", -1);
        return new DriftFacts(
            StoredNames.Parse<DriftMethod>(
                _file, "/drift, attribute method", _file.Text("/drift", "method")),
            [.. times],
            [.. _file.ReadArray<double>("/drift/tracker_phase_rad", -1)],
            [.. _file.ReadArray<double>("/drift/tracker_overlap", -1)],
            [.. _file.ReadArray<double>("/drift/frame_phase_rad", -1)],
            [.. _file.ReadArray<double>("/drift/frame_phase_sd_rad", -1)],
            [.. _file.ReadArray<double>("/drift/step_error_rad", -1)],
            [.. _file.ReadArray<double>("/drift/frame_gain", -1)],
            _file.Attribute<double>("/drift", "walk_rate_rad2_per_s"))
        {
            AmbiguousGaps = Optional("/drift/ambiguous_gaps"),
            Decorrelation = new DecorrelationFacts(
                _file.Has("/drift/tracker_overlap_without_noise") ? [.. _file.ReadArray<double>("/drift/tracker_overlap_without_noise", -1)] : [],
                Number("/drift", "decorrelation_time_s"),
                Number("/drift", "decorrelation_time_sd_s"),
                Number("/drift", "decorrelation_enhancement_factor")),
        };
    }

    // Files of before these were known lack them.
    private ImmutableArray<int> Optional(string path) => _file.Has(path) ? [.. _file.ReadArray<int>(path, -1)] : [];

    private double Number(string path, string name) => _file.TryNumber<double>(path, name) ?? double.NaN;

    private ImmutableArray<PixelReason> ReadReasons()
    {
        const string path = "/pixels/reason";
        if (!_file.Has(path))
        {
            return [];
        }

        byte[] reasons = _file.ReadArray<byte>(path, RowCount);
        return reasons.All(r => Enum.IsDefined((PixelReason)r))
            ? [.. reasons.Select(r => (PixelReason)r)]
            : throw DamagedFiles.Damaged(_file.Path, path, "has a reason that is not known");
    }

    private MatrixQuality ReadQuality()
    {
        const string group = "/quality";
        return new MatrixQuality(
            _file.Attribute<double>(group, "mean_visibility"),
            _file.Attribute<double>(group, "signal_to_noise"),
            _file.Attribute<int>(group, "valid_pixels"),
            _file.Attribute<int>(group, "valid_modes"),
            _file.Attribute<int>(group, "rows_normalised") != 0,
            _file.Lines(group, "warnings"))
        {
            Frames = FrameFindingGroup.Read(_file),
            LostPatterns = Optional(group + "/lost_patterns"),
            OutlyingModes = Optional(group + "/outlying_modes"),
            Budget = new ErrorBudget(
                Number(group, "loss_noise"),
                Number(group, "loss_drift"),
                Number(group, "loss_decorrelation"),
                Number(group, "loss_steps"),
                Number(group, "loss_saturation"),
                Number(group, "loss_excluded"),
                Number(group, "predicted_fidelity")),
        };
    }

    private ImmutableArray<bool> Flags(string path, int count) => [.. _file.ReadArray<byte>(path, count).Select(f => f != 0)];
}
