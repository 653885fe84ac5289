using System.Collections.Immutable;
using System.Globalization;
using Microsoft.Win32.SafeHandles;
using PureHDF;
using PureHDF.VOL.Native;
using TmLab.Failures;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>
/// Reads a stage file. Headers and small datasets go through the HDF5 library, large contiguous datasets straight from the file.
/// Whatever is wrong with the file is reported as a <see cref="BadInputException"/> that names file and dataset.
/// </summary>
internal sealed partial class StageFileReader : IDisposable
{
    // What a chunked (possibly compressed) small dataset may grow to, whatever its header says.
    private const long MostBytesOfSmallChunked = 1L << 30;
    private const long MostBytesOfChunk = 256L << 20;
    private const int MostObjects = 10_000;

    private readonly SafeFileHandle _file;
    private readonly ObservedStream _stream;
    private readonly NativeFile _hdf5;
    private readonly long _length;

    // The HDF5 library reads through one stream, which has one position.
    private readonly Lock _gate = new();

    private StageFileReader(string path, SafeFileHandle file, ObservedStream stream, NativeFile hdf5, uint? seal)
    {
        Path = path;
        Seal = seal;
        _file = file;
        _stream = stream;
        _hdf5 = hdf5;
        _length = RandomAccess.GetLength(file);
    }

    /// <summary>The file, as the caller named it.</summary>
    public string Path { get; }

    /// <summary>Whether the headers' checksum was there and right.</summary>
    public bool IsSealed => Seal is not null;

    /// <summary>The headers' checksum, which covers the checksums of the data too; null for files rewritten by another program.</summary>
    public uint? Seal { get; }

    /// <summary>The kind of file.</summary>
    public StageFormat Format { get; private set; } = StageFormat.Measurement;

    /// <summary>The version of its layout.</summary>
    public int FormatVersion { get; private set; }

    /// <summary>Opens a stage file.</summary>
    /// <param name="path">The file.</param>
    /// <param name="expected">The kind that is wanted; null for any.</param>
    /// <exception cref="BadInputException">The file is missing, damaged, no stage file or of another kind or a newer version.</exception>
    public static StageFileReader Open(string path, StageFormat? expected)
    {
        SafeFileHandle file = InputFiles.Open(path);
        try
        {
            RequireWholeHdf5(path, file);
            uint? seal = FileSeal.Check(file, path);
            var stream = new ObservedStream(file, writable: false);
            NativeFile hdf5 = DamagedFiles.Guard(path, null, () => H5File.Open(stream, leaveOpen: false));
            var reader = new StageFileReader(path, file, stream, hdf5, seal);
            reader.RequireFormat(expected);
            return reader;
        }
        catch
        {
            file.Dispose();
            throw;
        }
    }

    /// <summary>Whether the file has a group or dataset of that name.</summary>
    public bool Has(string path) => Guard(path, () => Exists(path));

    /// <summary>Reads a small dataset whole.</summary>
    /// <param name="path">Its absolute name.</param>
    /// <param name="shape">The shape that it must have; a negative length stands for any.</param>
    public unsafe T[] ReadArray<T>(string path, params ReadOnlySpan<long> shape)
        where T : unmanaged
    {
        long[] wanted = shape.ToArray();
        return Guard(path, () =>
        {
            NativeDataset dataset = Numbers(path);
            bool swapped = ElementTypes.RequireAndTellSwapped<T>(Path, path, dataset.Type);
            RequireShape(path, dataset, wanted);
            long count = RequirePlausible(path, dataset, sizeof(T));
            T[] values = count == 0 ? [] : dataset.Read<T[]>();
            if (swapped)
            {
                ElementTypes.SwapParts(values.AsSpan());
            }

            return values;
        });
    }

    /// <summary>Reads a text that must be there.</summary>
    public string Text(string path, string name) => TryAttribute<string>(path, name) ?? throw Missing($"{path}, attribute {name}");

    /// <summary>Reads lines of text; none when the attribute is absent.</summary>
    public ImmutableArray<string> Lines(string path, string name) => [.. TryAttribute<string[]>(path, name) ?? []];

    /// <summary>Reads an attribute of a group or dataset; null when it is absent.</summary>
    public T? TryAttribute<T>(string path, string name)
    {
        return Guard($"{path}, attribute {name}", () =>
        {
            IH5Object target = path == "/" ? _hdf5 : _hdf5.Get(path);
            return target.AttributeExists(name) ? target.Attribute(name).Read<T>() : default;
        });
    }

    /// <summary>Reads a number that must be there.</summary>
    public T Attribute<T>(string path, string name)
        where T : struct => TryNumber<T>(path, name) ?? throw Missing($"{path}, attribute {name}");

    /// <summary>Reads a number; null when it is absent.</summary>
    public T? TryNumber<T>(string path, string name)
        where T : struct => Guard($"{path}, attribute {name}", () =>
        {
            IH5Object target = path == "/" ? _hdf5 : _hdf5.Get(path);
            return target.AttributeExists(name) ? target.Attribute(name).Read<T>() : (T?)null;
        });

    /// <summary>Opens a large dataset.</summary>
    /// <param name="path">Its absolute name.</param>
    /// <param name="rank">The number of dimensions that it must have.</param>
    public IDatasetBlocks<T> OpenBlocks<T>(string path, int rank)
        where T : unmanaged => Guard(path, () => Blocks<T>(path, rank));

    /// <summary>The dimensions of a dataset.</summary>
    public ImmutableArray<long> Shape(string path) =>
        Guard(path, () => Dataset(path).Space.Dimensions.Select(d => checked((long)d)).ToImmutableArray());

    /// <summary>Says where the file comes from.</summary>
    public StageProvenance Provenance()
    {
        ImmutableArray<string> files = Lines("/", "parent_file");
        ImmutableArray<string> digests = Lines("/", "parent_sha256");
        string created = Text("/", "created_utc");
        if (files.Length != digests.Length || files.Length > StageProvenance.MostParents
            || !DateTimeOffset.TryParse(created, CultureInfo.InvariantCulture, DateTimeStyles.RoundtripKind, out DateTimeOffset time))
        {
            throw DamagedFiles.Damaged(Path, "root attributes", "do not say where the file comes from");
        }

        return new StageProvenance(
            [.. files.Zip(digests, (f, d) => new StageParent(f, d))],
            Text("/", "settings"),
            Text("/", "tool_version"),
            time);
    }

    /// <summary>Says what the file holds.</summary>
    public StageFileDescription Describe()
    {
        var found = new List<DatasetDescription>();
        Guard<object?>(null, () =>
        {
            Collect(_hdf5, "", found);
            return null;
        });
        return new StageFileDescription(
            Path,
            _length,
            Format,
            FormatVersion,
            Provenance(),
            IsSealed,
            [.. found.OrderBy(d => d.Path, StringComparer.Ordinal)]);
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _hdf5.Dispose();
        _file.Dispose();
    }

    private static void RequireWholeHdf5(string path, SafeFileHandle file)
    {
        (bool isHdf5, long? end) = Superblock.Read(file);
        long length = RandomAccess.GetLength(file);
        if (!isHdf5)
        {
            throw new BadInputException(
                path, null, length == 0 ? "is empty" : "is not an HDF5 file", "name a file that this program has written");
        }

        if (end > length)
        {
            string wanted = end == long.MaxValue ? "" : $" of {end}";
            throw DamagedFiles.Damaged(path, null, $"is cut off: it has {length} bytes{wanted}");
        }
    }

    private void RequireFormat(StageFormat? expected)
    {
        string name = TryAttribute<string>("/", "format")
            ?? throw new BadInputException(Path, null, "is an HDF5 file, but not one of this program", "name a stage file");
        FormatVersion = TryNumber<int>("/", "format_version") ?? throw Missing("attribute format_version");
        Format = StageFormat.All.FirstOrDefault(f => f.Name == name)
            ?? throw new BadInputException(Path, "attribute format", $"is \"{name}\", which is not known", "name a stage file");
        if (expected is not null && Format != expected)
        {
            throw new BadInputException(
                Path, null, $"holds a {Format.Contents}, not a {expected.Contents}", $"name a file whose format is {expected.Name}");
        }

        if (FormatVersion < 1 || FormatVersion > Format.Version)
        {
            throw new BadInputException(
                Path,
                "attribute format_version",
                $"is {FormatVersion}, but this program knows versions up to {Format.Version}",
                "use a newer version of the program");
        }
    }

    private IDatasetBlocks<T> Blocks<T>(string path, int rank)
        where T : unmanaged
    {
        NativeDataset dataset = Numbers(path);
        bool swapped = ElementTypes.RequireAndTellSwapped<T>(Path, path, dataset.Type);
        RequireShape(path, dataset, [.. Enumerable.Repeat(-1L, rank)]);
        _ = RequireStored(path, dataset, dataset.Type.Size);
        if (ContiguousPlace.Find<T>(dataset, _stream) is not { } offset)
        {
            return new SelectedBlocks<T>(dataset, _gate, Path, path, swapped);
        }

        long[] shape = [.. dataset.Space.Dimensions.Select(d => (long)d)];
        return new ContiguousBlocks<T>(
            _file, Path, path, offset, shape[0], shape.Skip(1).Aggregate(1L, (a, b) => a * b), swapped);
    }

    private NativeDataset Dataset(string path)
    {
        if (!Exists(path))
        {
            throw Missing(path);
        }

        return _hdf5.Get(path) as NativeDataset ?? throw DamagedFiles.Damaged(Path, path, "is not a dataset");
    }

    // A dataset of numbers, after a check that they are stored in the byte order that we read; files of ours always are.
    private NativeDataset Numbers(string path)
    {
        var transfers = new List<(long Position, int Length)>();
        _stream.Transfers = transfers;
        NativeDataset dataset = Dataset(path);
        _ = dataset.Type.Size;
        _stream.Transfers = null;
        if (!IsSealed && ByteOrder.IsBigEndian(_file, transfers))
        {
            throw new BadInputException(
                Path, path, "is stored with the most significant byte first", "rewrite the dataset with the least significant byte first");
        }

        return dataset;
    }

    private bool Exists(string path)
    {
        string parent = "";
        foreach (string name in path.Split('/', StringSplitOptions.RemoveEmptyEntries))
        {
            IH5Group? group = parent.Length == 0 ? _hdf5 : _hdf5.Get(parent) as IH5Group;
            if (group is null || !group.LinkExists(name))
            {
                return false;
            }

            parent += "/" + name;
        }

        return true;
    }

    private void RequireShape(string path, NativeDataset dataset, long[] wanted)
    {
        ulong[] found = dataset.Space.Dimensions;
        bool fits = found.Length == wanted.Length && found.Zip(wanted).All(p => p.Second < 0 || p.First == (ulong)p.Second);
        if (!fits)
        {
            string needed = string.Join(" × ", wanted.Select(w => w < 0 ? "any" : w.ToString(CultureInfo.InvariantCulture)));
            throw DamagedFiles.Damaged(Path, path, $"has shape {string.Join(" × ", found)}, needed {needed}");
        }
    }

    // Number of elements of a dataset that is to be read whole, after a check that reading it cannot take absurd memory.
    private long RequirePlausible(string path, NativeDataset dataset, int elementBytes)
    {
        long bytes = RequireStored(path, dataset, elementBytes);
        if (bytes > Math.Max(_length, MostBytesOfSmallChunked))
        {
            throw DamagedFiles.Damaged(Path, path, $"claims {bytes} bytes in a file of {_length}");
        }

        return bytes / elementBytes;
    }

    private long RequireStored(string path, NativeDataset dataset, int elementBytes)
    {
        long bytes = dataset.Space.Dimensions.Aggregate((long)elementBytes, (a, b) => checked(a * (long)b));
        bool isChunked = dataset.Layout.Class is H5DataLayoutClass.Chunked;
        long chunk = isChunked ? dataset.Layout.Chunks.Aggregate((long)elementBytes, (a, b) => checked(a * (long)b)) : 0;
        if ((!isChunked && bytes > _length) || chunk > MostBytesOfChunk)
        {
            throw DamagedFiles.Damaged(Path, path, $"claims {Math.Max(bytes, chunk)} bytes in a file of {_length}");
        }

        return bytes;
    }

    private void Collect(IH5Group group, string prefix, List<DatasetDescription> found)
    {
        foreach (IH5Object child in group.Children())
        {
            string path = $"{prefix}/{child.Name}";
            if (found.Count > MostObjects || prefix.Length > 1000)
            {
                throw DamagedFiles.Damaged(Path, prefix, "holds too many objects");
            }

            if (child is IH5Group inner)
            {
                Collect(inner, path, found);
            }
            else if (child is NativeDataset dataset)
            {
                string? units = dataset.AttributeExists("units") ? dataset.Attribute("units").Read<string>() : null;
                found.Add(new DatasetDescription(
                    path, [.. dataset.Space.Dimensions.Select(d => (long)d)], ElementTypes.Name(dataset.Type), units));
            }
        }
    }

    private BadInputException Missing(string place) => DamagedFiles.Damaged(Path, place, "is missing");

    private T Guard<T>(string? place, Func<T> step)
    {
        lock (_gate)
        {
            return DamagedFiles.Guard(Path, place, step);
        }
    }
}
