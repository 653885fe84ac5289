using System.Numerics;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Writes a measurement stage file, frame by frame; the file appears under its name on <see cref="Complete"/>.</summary>
/// <remarks>Frames may come in any order and from several threads; each is written once.</remarks>
public sealed class MeasurementFileWriter : IMeasurementSink, IDisposable
{
    private readonly StageFileWriter _file;
    private readonly ReservedDataset<ushort> _counts;
    private readonly int _frameCount;
    private readonly ImageSize _frameSize;

    /// <summary>Begins a file.</summary>
    /// <param name="path">Its final name.</param>
    /// <param name="overwrite">Whether a file of that name may be replaced.</param>
    /// <param name="provenance">Where it comes from.</param>
    /// <param name="frameCount">Number of frames, ≥ 1.</param>
    /// <param name="frameSize">Size of every frame.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to, or the disk has no room for the frames.</exception>
    public MeasurementFileWriter(string path, bool overwrite, StageProvenance provenance, int frameCount, ImageSize frameSize)
    {
        Preconditions.InRange(frameCount, 1, int.MaxValue);
        Preconditions.InRange(frameSize.PixelCount, 1, int.MaxValue);
        _frameCount = frameCount;
        _frameSize = frameSize;
        _counts = new ReservedDataset<ushort>(
            MeasurementFileReader.Counts, "count", (ulong)frameCount, (ulong)frameSize.Height, (ulong)frameSize.Width);
        _file = StageFileWriter.Begin(path, overwrite, StageFormat.Measurement, provenance, [_counts]);
        _file.Attach(_counts);
    }

    /// <inheritdoc/>
    /// <exception cref="OutputException">The disk is full or fails.</exception>
    public void WriteFrame(int index, ReadOnlySpan<ushort> counts)
    {
        Preconditions.InRange(index, 0, _frameCount - 1);
        Preconditions.SameLength(counts.Length, _frameSize.PixelCount);
        _counts.Write((long)index * _frameSize.PixelCount, counts);
    }

    /// <inheritdoc/>
    /// <exception cref="OutputException">The disk is full or fails, or reading back gave something else.</exception>
    /// <exception cref="InvalidOperationException">A frame has not been written.</exception>
    /// <exception cref="ArgumentException">The facts do not fit the frames.</exception>
    public void Complete(MeasurementFacts facts)
    {
        Preconditions.SameLength(facts.Schedule.Frames.Length, _frameCount);
        Preconditions.SameLength(facts.FrameFacts.Length, _frameCount);
        Preconditions.SameLength(facts.DarkCounts.Length, _frameSize.PixelCount);
        Preconditions.Require(facts.FrameSize == _frameSize, "The facts are of frames of another size.");
        ScheduleGroup.Write(_file, facts.Schedule);
        ScheduleGroup.Write(_file, facts.FrameFacts);
        _file.Add(MeasurementFileReader.Dark, facts.DarkCounts.ToArray(), "count", (ulong)_frameSize.Height, (ulong)_frameSize.Width);
        _file.AddAttribute("/", MeasurementFileReader.Manifest, ManifestText.Write(facts.Manifest));
        WritePatterns(facts);
        GeometryGroup.WriteCalibration(_file, facts.PhaseLut, facts.Flatness);
        _file.Complete();
    }

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private void WritePatterns(MeasurementFacts facts)
    {
        if (facts.CustomPatterns.IsDefaultOrEmpty)
        {
            return;
        }

        ModeDescription modes = facts.Manifest.Modes;
        StoredComplex128[] stored = [.. facts.CustomPatterns.Select((Complex c) => new StoredComplex128 { r = c.Real, i = c.Imaginary })];
        _file.Add(MeasurementFileReader.Patterns, stored, "1", (ulong)modes.PatternCount, (ulong)modes.ModeCount);
    }
}
