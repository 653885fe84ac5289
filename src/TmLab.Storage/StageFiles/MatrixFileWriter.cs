using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Storage.StageFiles;

/// <summary>
/// Writes a transmission-matrix stage file, rows in any order and from several threads; the file appears under its name on
/// <see cref="Complete"/>.
/// </summary>
public sealed class MatrixFileWriter : IRowBlockWriter, IDisposable
{
    private readonly StageFileWriter _file;
    private readonly ReservedRows _rows;
    private readonly int _rowCount;
    private readonly int _columnCount;

    /// <summary>Begins a file.</summary>
    /// <param name="path">Its final name.</param>
    /// <param name="overwrite">Whether a file of that name may be replaced.</param>
    /// <param name="provenance">Where it comes from.</param>
    /// <param name="rowCount">Number of pixels, ≥ 1.</param>
    /// <param name="columnCount">Number of modes, ≥ 1.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to, or the disk has no room for the matrix.</exception>
    public MatrixFileWriter(string path, bool overwrite, StageProvenance provenance, int rowCount, int columnCount)
    {
        _rowCount = rowCount;
        _columnCount = columnCount;
        _rows = new ReservedRows(MatrixFileReader.Matrix, "sqrt(count)", rowCount, columnCount);
        _file = StageFileWriter.Begin(path, overwrite, StageFormat.Matrix, provenance, [_rows.Dataset]);
        _file.Attach(_rows.Dataset);
    }

    /// <inheritdoc/>
    /// <exception cref="OutputException">The disk is full or fails.</exception>
    public void WriteRows(int firstRow, ReadOnlySpan<Complex64> source) => _rows.WriteRows(firstRow, source);

    /// <summary>Takes the facts; after that the matrix is whole.</summary>
    /// <exception cref="OutputException">The disk is full or fails, or reading back gave something else.</exception>
    /// <exception cref="InvalidOperationException">A row has not been written.</exception>
    /// <exception cref="ArgumentException">The facts do not fit the matrix.</exception>
    public void Complete(TransmissionMatrixFacts facts)
    {
        WritePixels(facts.Pixels);
        WriteModes(facts.Modes);
        WriteDrift(facts.Drift);
        WriteQuality(facts.Quality);
        GeometryGroup.WriteTitle(_file, facts.Title, facts.WavelengthNm);
        GeometryGroup.WriteSizes(_file, facts.CameraRegion, facts.Grid);
        GeometryGroup.WriteModulator(_file, facts.Modulator);
        GeometryGroup.WriteCalibration(_file, facts.PhaseLut, facts.Flatness);
        _file.Complete();
    }

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private void WritePixels(PixelFacts pixels)
    {
        Preconditions.SameLength(pixels.Y.Length, _rowCount);
        Preconditions.SameLength(pixels.X.Length, _rowCount);
        Preconditions.SameLength(pixels.Valid.Length, _rowCount);
        Preconditions.SameLength(pixels.Visibility.Length, _rowCount);
        Preconditions.SameLength(pixels.NoiseRms.Length, _rowCount);
        _file.Add("/pixels/y", pixels.Y.ToArray(), "pixel");
        _file.Add("/pixels/x", pixels.X.ToArray(), "pixel");
        _file.Add("/pixels/valid", Flags(pixels.Valid), "1");
        _file.Add("/pixels/visibility", pixels.Visibility.ToArray(), "1");
        _file.Add("/pixels/noise_rms", pixels.NoiseRms.ToArray(), "sqrt(count)");
        if (!pixels.Reason.IsEmpty)
        {
            Preconditions.SameLength(pixels.Reason.Length, _rowCount);
            _file.Add("/pixels/reason", pixels.Reason.Select(r => (byte)r).ToArray(), "1");
            _file.AddAttribute("/pixels/reason", "meaning", string.Join(", ", Enum.GetValues<PixelReason>().Select(r => $"{(int)r} {StoredNames.Of(r)}")));
        }
    }

    private void WriteModes(ModeFacts modes)
    {
        Preconditions.SameLength(modes.Valid.Length, _columnCount);
        Preconditions.SameLength(modes.NoiseRms.Length, _columnCount);
        _file.Add("/modes/valid", Flags(modes.Valid), "1");
        _file.Add("/modes/noise_rms", modes.NoiseRms.ToArray(), "sqrt(count)");
    }

    private void WriteDrift(DriftFacts drift)
    {
        _file.AddAttribute("/drift", "method", StoredNames.Of(drift.Method));
        _file.Add("/drift/tracker_time_s", drift.TrackerTimeS.ToArray(), "s");
        _file.Add("/drift/tracker_phase_rad", drift.TrackerPhaseRad.ToArray(), "rad");
        _file.Add("/drift/tracker_overlap", drift.TrackerOverlap.ToArray(), "1");
        _file.Add("/drift/frame_phase_rad", drift.FramePhaseRad.ToArray(), "rad");
        _file.Add("/drift/frame_phase_sd_rad", drift.FramePhaseSdRad.ToArray(), "rad");
        _file.Add("/drift/step_error_rad", drift.StepErrorRad.ToArray(), "rad");
        _file.Add("/drift/frame_gain", drift.FrameGain.ToArray(), "1");
        _file.AddAttribute("/drift", "walk_rate_rad2_per_s", drift.WalkRateRad2PerS);
        _file.Add("/drift/ambiguous_gaps", drift.AmbiguousGaps.ToArray(), "1");
        DecorrelationFacts change = drift.Decorrelation;
        _file.Add("/drift/tracker_overlap_without_noise", change.Overlap.ToArray(), "1");
        _file.AddAttribute("/drift", "decorrelation_time_s", change.TimeConstantS);
        _file.AddAttribute("/drift", "decorrelation_time_sd_s", change.TimeConstantSdS);
        _file.AddAttribute("/drift", "decorrelation_enhancement_factor", change.EnhancementFactor);
    }

    private void WriteQuality(MatrixQuality quality)
    {
        const string group = "/quality";
        _file.AddAttribute(group, "mean_visibility", quality.MeanVisibility);
        _file.AddAttribute(group, "signal_to_noise", quality.SignalToNoise);
        _file.AddAttribute(group, "valid_pixels", quality.ValidPixels);
        _file.AddAttribute(group, "valid_modes", quality.ValidModes);
        _file.AddAttribute(group, "rows_normalised", quality.RowsNormalised ? 1 : 0);
        _file.AddLines(group, "warnings", quality.Warnings);
        _file.Add(group + "/lost_patterns", quality.LostPatterns.ToArray(), "1");
        _file.Add(group + "/outlying_modes", quality.OutlyingModes.ToArray(), "1");
        FrameFindingGroup.Write(_file, quality.Frames);
        WriteBudget(group, quality.Budget);
    }

    private void WriteBudget(string group, ErrorBudget budget)
    {
        _file.AddAttribute(group, "predicted_fidelity", budget.Fidelity);
        _file.AddAttribute(group, "loss_noise", budget.Noise);
        _file.AddAttribute(group, "loss_drift", budget.Drift);
        _file.AddAttribute(group, "loss_decorrelation", budget.Decorrelation);
        _file.AddAttribute(group, "loss_steps", budget.Steps);
        _file.AddAttribute(group, "loss_saturation", budget.Saturation);
        _file.AddAttribute(group, "loss_excluded", budget.Excluded);
    }

    private static byte[] Flags(IEnumerable<bool> flags) => [.. flags.Select(f => f ? (byte)1 : (byte)0)];
}
