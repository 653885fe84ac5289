using System.Collections.Immutable;
using System.Globalization;
using Microsoft.Win32.SafeHandles;
using PureHDF;
using TmLab.Failures;
using TmLab.Numerics;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>
/// Writes one stage file. The large datasets are given at the start: room for them is kept and they are filled directly. All
/// that is small is collected and written by the HDF5 library at the end, behind them. The file appears under its name on
/// <see cref="Complete"/>; disposing before that leaves nothing.
/// </summary>
/// <remarks>
/// The HDF5 library wants to know a file's whole tree before it writes the first byte, but a stage knows its small results only at
/// its end. So the library writes the tree twice: once at the start, with the large datasets alone and into nothing, which shows where
/// it puts their data; and once at the end, with everything. Both times the large datasets come first, and that they land in the
/// same place is checked by reading the file back.
/// </remarks>
internal sealed class StageFileWriter : IDisposable
{
    /// <summary>The group of the large datasets' checksums, which mirrors the names of the datasets.</summary>
    public const string ChecksumGroup = "/checksums";

    /// <summary>The largest number of lines of a text attribute.</summary>
    public const int MostLines = 3000;

    private const int UnspecificIoFailure = unchecked((int)0x80131620);

    private readonly AtomicOutput _output;
    private readonly SafeFileHandle _file;
    private readonly StageFormat _format;
    private readonly StageProvenance _provenance;
    private readonly ImmutableArray<ReservedDataset> _reserved;
    private readonly Hdf5Tree _tree = new();
    private bool _completed;

    private StageFileWriter(
        AtomicOutput output, SafeFileHandle file, StageFormat format, StageProvenance provenance, ImmutableArray<ReservedDataset> reserved)
    {
        _output = output;
        _file = file;
        _format = format;
        _reserved = reserved;
        _provenance = provenance;
        foreach (ReservedDataset dataset in reserved)
        {
            _tree.Add(dataset.Path, dataset.Describe(), dataset.Units);
        }
    }

    /// <summary>Begins a file.</summary>
    /// <param name="path">Its final name.</param>
    /// <param name="overwrite">Whether a file of that name may be replaced.</param>
    /// <param name="format">Its kind.</param>
    /// <param name="provenance">Where it comes from.</param>
    /// <param name="reserved">The large datasets.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to, or the disk has no room for the large datasets.</exception>
    public static StageFileWriter Begin(
        string path, bool overwrite, StageFormat format, StageProvenance provenance, ImmutableArray<ReservedDataset> reserved)
    {
        LayOut(reserved);
        AtomicOutput output = AtomicOutput.Begin(path, overwrite);
        try
        {
            SafeFileHandle file = OutputFailures.Guard(path, () => Create(output, reserved));
            return new StageFileWriter(output, file, format, provenance, reserved);
        }
        catch
        {
            output.Dispose();
            throw;
        }
    }

    /// <summary>Lets a large dataset write into this file.</summary>
    public ReservedDataset<T> Attach<T>(ReservedDataset<T> dataset)
        where T : unmanaged
    {
        dataset.Attach(_file, _output.FinalPath);
        return dataset;
    }

    /// <summary>Adds a small dataset; an empty one keeps its shape.</summary>
    /// <param name="path">Its absolute name.</param>
    /// <param name="values">The elements, row-major.</param>
    /// <param name="units">Their unit; "1" for pure numbers.</param>
    /// <param name="dimensions">The shape; one-dimensional when not given.</param>
    public void Add<T>(string path, T[] values, string units, params ulong[] dimensions)
        where T : unmanaged
    {
        ulong[] shape = dimensions.Length == 0 ? [(ulong)values.Length] : dimensions;
        Preconditions.SameLength(values.Length, (long)shape.Aggregate(1UL, (a, b) => a * b));
        _tree.Add(path, new H5Dataset(values, fileDims: shape), units);
    }

    /// <summary>Adds lines of text as an attribute; at most <see cref="MostLines"/>.</summary>
    /// <remarks>
    /// Texts are attributes and not datasets: HDF5 keeps texts of variable length apart from the attribute itself, so that their length
    /// does not matter, while datasets of them as the library writes them cannot be copied by the HDF5 tools. Sixteen bytes a
    /// line do count, and the library damages a file with an attribute of 60,000 bytes and more.
    /// </remarks>
    public void AddLines(string path, string name, ImmutableArray<string> lines)
    {
        Preconditions.InRange(lines.Length, 0, MostLines);
        AddAttribute(path, name, lines.ToArray());
    }

    /// <summary>Adds an attribute of a number or a text to a group or a dataset that has been added; null adds nothing.</summary>
    public void AddAttribute(string path, string name, object? value)
    {
        if (value is not null)
        {
            _tree.AddAttribute(path, name, value);
        }
    }

    /// <summary>Writes all that is small, checks the file by reading it back, flushes it and gives it its name.</summary>
    /// <exception cref="OutputException">The disk is full or fails, or reading back gave something else.</exception>
    /// <exception cref="InvalidOperationException">A part of a large dataset has not been written, or was written twice.</exception>
    public void Complete()
    {
        RequireAllWritten();
        AddProvenance(_provenance);
        foreach (ReservedDataset dataset in _reserved)
        {
            string path = ChecksumGroup + dataset.Path;
            Add(path, dataset.Checksums.Values, "1");
            AddAttribute(path, "block_bytes", dataset.Checksums.BlockBytes);
            AddAttribute(path, "algorithm", "CRC-32 (IEEE 802.3)");
        }

        OutputFailures.Guard(_output.FinalPath, WriteTree);
        _file.Dispose();
        ReadBack();
        _output.Commit();
        _completed = true;
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _file.Dispose();
        if (!_completed)
        {
            _output.Dispose();
        }
    }

    private static void LayOut(ImmutableArray<ReservedDataset> reserved)
    {
        using var nothing = new ObservedStream(null, writable: true);
        var tree = new Hdf5Tree();
        H5Dataset[] described = [.. reserved.Select(d => tree.Add(d.Path, d.Describe(), d.Units))];
        using H5NativeWriter writer = tree.Build().BeginWrite(nothing, new H5WriteOptions());
        for (int k = 0; k < reserved.Length; k++)
        {
            reserved[k].Locate(writer, described[k], nothing);
        }
    }

    private static SafeFileHandle Create(AtomicOutput output, ImmutableArray<ReservedDataset> reserved)
    {
        // Asking for the room at once makes a full disk known before hours of computing.
        long end = reserved.Select(d => d.Offset + d.ByteCount).DefaultIfEmpty(0).Max();
        try
        {
            SafeFileHandle file = File.OpenHandle(
                output.TemporaryPath, FileMode.CreateNew, FileAccess.ReadWrite, FileShare.Read, FileOptions.None, end);
            RandomAccess.SetLength(file, end);
            return file;
        }
        catch (IOException e) when (e.HResult == UnspecificIoFailure)
        {
            // Failures to open carry the system's error number; only the refusal of room carries none.
            throw new OutputException(
                output.FinalPath, OutputFailure.DiskFull, $"free {end} bytes or choose another disk", e);
        }
    }

    // Last, as the parents' digests may still be under way while the data are written.
    private void AddProvenance(StageProvenance provenance)
    {
        AddAttribute("/", "format", _format.Name);
        AddAttribute("/", "format_version", _format.Version);
        AddAttribute("/", "created_utc", provenance.CreatedUtc.ToString("O", CultureInfo.InvariantCulture));
        AddAttribute("/", "tool_version", provenance.ToolVersion);
        AddAttribute("/", "parent_file", provenance.Parents.Select(p => p.File).ToArray());
        AddAttribute("/", "parent_sha256", provenance.Parents.Select(p => p.Sha256).ToArray());
        AddAttribute("/", "settings", provenance.SettingsJson);
    }

    private void RequireAllWritten()
    {
        foreach (ReservedDataset dataset in _reserved)
        {
            int block = dataset.Checksums.FirstIncompleteBlock;
            if (block >= 0)
            {
                long element = (long)block * dataset.Checksums.BlockBytes;
                throw new InvalidOperationException(
                    $"{dataset.Path} has not been written exactly once everywhere: look at byte {element} and the mebibyte behind it.");
            }
        }
    }

    private void WriteTree()
    {
        var stream = new ObservedStream(_file, writable: true);
        _tree.Build().Write(stream, new H5WriteOptions());
        FileSeal.Append(_file, [.. _reserved.Select(d => (d.Offset, d.ByteCount)).Order()]);
    }

    private void ReadBack()
    {
        try
        {
            using var reader = StageFileReader.Open(_output.TemporaryPath, _format);
            foreach (ReservedDataset dataset in _reserved)
            {
                reader.RequirePlace(dataset.Path, dataset.Offset);
                reader.VerifyEnds(dataset.Path);
            }
        }
        catch (BadInputException e)
        {
            throw new OutputException(_output.FinalPath, OutputFailure.Corrupted, "check the disk and run the stage again", e);
        }
    }
}
