using System.Collections.Immutable;
using System.Numerics;
using System.Runtime.InteropServices;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Reads a measurement stage file: frames in blocks, in bounded memory, from several threads at once.</summary>
public sealed class MeasurementFileReader : IFrameBlockReader
{
    internal const string Counts = "/frames/counts";
    internal const string Dark = "/camera/dark";
    internal const string Manifest = "manifest";
    internal const string Patterns = "/modes/custom_patterns";

    private readonly StageFileReader _file;
    private readonly IDatasetBlocks<ushort> _counts;
    private readonly Lazy<MeasurementFacts> _facts;

    /// <summary>Opens a file.</summary>
    /// <exception cref="BadInputException">The file is missing, damaged or no measurement file.</exception>
    public MeasurementFileReader(string path)
    {
        _file = StageFileReader.Open(path, StageFormat.Measurement);
        try
        {
            _counts = _file.OpenBlocks<ushort>(Counts, 3);
            (FrameCount, FrameSize) = Sizes(_file.Shape(Counts));
            _facts = new Lazy<MeasurementFacts>(ReadFacts);
        }
        catch
        {
            _file.Dispose();
            throw;
        }
    }

    /// <inheritdoc/>
    public int FrameCount { get; }

    /// <inheritdoc/>
    public ImageSize FrameSize { get; }

    /// <summary>Everything besides the counts; read when first asked for.</summary>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public MeasurementFacts Facts => _facts.Value;

    /// <summary>Where the file comes from.</summary>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    public StageProvenance Provenance => _file.Provenance();

    /// <inheritdoc/>
    public void Read(int firstFrame, int frameCount, int firstPixel, int pixelCount, Span<ushort> destination) =>
        _counts.Read(firstFrame, frameCount, firstPixel, pixelCount, destination);

    /// <summary>Compares all counts with the checksums in the file. Files rewritten without checksums pass.</summary>
    /// <exception cref="BadInputException">A block differs.</exception>
    /// <exception cref="OperationCanceledException">It was stopped.</exception>
    public void Verify(IProgress<StageProgress>? progress = null, CancellationToken cancel = default) =>
        _file.Verify([Counts], progress, cancel);

    /// <inheritdoc/>
    public void Dispose() => _file.Dispose();

    private (int FrameCount, ImageSize Size) Sizes(ImmutableArray<long> shape)
    {
        if (shape.Any(s => s is < 1 or > int.MaxValue) || shape[1] * shape[2] > int.MaxValue)
        {
            throw DamagedFiles.Damaged(_file.Path, Counts, $"has shape {string.Join(" × ", shape)}");
        }

        return ((int)shape[0], new ImageSize((int)shape[2], (int)shape[1]));
    }

    private MeasurementFacts ReadFacts()
    {
        MeasurementManifest manifest = ManifestText.Read(_file.Path, "attribute manifest", _file.Text("/", Manifest));
        return new MeasurementFacts(
            manifest,
            FrameSize,
            ScheduleGroup.ReadSchedule(_file, FrameCount),
            ScheduleGroup.ReadFacts(_file, FrameCount),
            ImmutableCollectionsMarshal.AsImmutableArray(_file.ReadArray<float>(Dark, FrameSize.Height, FrameSize.Width)),
            ReadPatterns(manifest.Modes),
            GeometryGroup.ReadLut(_file),
            GeometryGroup.ReadFlatness(_file));
    }

    private ImmutableArray<Complex> ReadPatterns(ModeDescription modes) => _file.Has(Patterns)
        ? [.. _file.ReadArray<StoredComplex128>(Patterns, modes.PatternCount, modes.ModeCount).Select(c => new Complex(c.r, c.i))]
        : [];
}
