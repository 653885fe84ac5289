using System.Runtime.InteropServices;
using Microsoft.Win32.SafeHandles;
using PureHDF;
using PureHDF.Selections;
using TmLab.Numerics;
using TmLab.Storage.AtomicFiles;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// A large contiguous dataset whose place in the file is known before its data: its elements go straight to the file, in any order
/// and from several threads, past the HDF5 library.
/// </summary>
internal abstract class ReservedDataset
{
    private protected ReservedDataset(string path, string units, ulong[] dimensions, int elementBytes)
    {
        Path = path;
        Units = units;
        Dimensions = dimensions;
        ByteCount = checked((long)dimensions.Aggregate(1UL, (a, b) => checked(a * b)) * elementBytes);
        Preconditions.InRange(ByteCount, 1, long.MaxValue);
        Checksums = new BlockChecksums(ByteCount);
    }

    /// <summary>The dataset's absolute name, such as <c>/frames/counts</c>.</summary>
    public string Path { get; }

    /// <summary>The unit of its elements.</summary>
    public string Units { get; }

    /// <summary>Its shape.</summary>
    public ulong[] Dimensions { get; }

    /// <summary>Its size in the file.</summary>
    public long ByteCount { get; }

    /// <summary>Checksums of what has been written.</summary>
    public BlockChecksums Checksums { get; }

    /// <summary>Where its first byte stands in the file; known once the file has been laid out.</summary>
    public long Offset { get; private protected set; }

    /// <summary>A description for the HDF5 library, without data.</summary>
    public abstract H5Dataset Describe();

    /// <summary>Learns the offset by letting the library write one element into a stream that notes where.</summary>
    public abstract void Locate(H5NativeWriter writer, H5Dataset described, ObservedStream observed);
}

/// <inheritdoc/>
/// <typeparam name="T">The element as it stands in the file.</typeparam>
internal sealed class ReservedDataset<T> : ReservedDataset
    where T : unmanaged
{
    // Writes of at least this many bytes are sent on their way to the disk at once.
    private const long WorthCarrying = 4 << 20;

    private string _finalPath = "";
    private SafeFileHandle? _file;

    /// <summary>Describes a dataset.</summary>
    public unsafe ReservedDataset(string path, string units, params ulong[] dimensions)
        : base(path, units, dimensions, sizeof(T))
    {
    }

    /// <inheritdoc/>
    public override H5Dataset Describe() => new H5Dataset<T[]>(Dimensions);

    /// <inheritdoc/>
    public override unsafe void Locate(H5NativeWriter writer, H5Dataset described, ObservedStream observed)
    {
        var transfers = new List<(long Position, int Length)>();
        observed.Transfers = transfers;
        ulong[] first = new ulong[Dimensions.Length];
        ulong[] one = [.. Enumerable.Repeat(1UL, Dimensions.Length)];
        writer.Write((H5Dataset<T[]>)described, new T[1], fileSelection: new HyperslabSelection(first.Length, first, one));
        observed.Transfers = null;
        if (transfers is not [(long offset, int length)] || length != sizeof(T))
        {
            throw new NotSupportedException($"The HDF5 library does not write {Path} as one contiguous block.");
        }

        Offset = offset;
    }

    /// <summary>Gives it the file to write to.</summary>
    public void Attach(SafeFileHandle file, string finalPath)
    {
        _file = file;
        _finalPath = finalPath;
    }

    /// <summary>Writes elements from the one with the (row-major) number <paramref name="firstElement"/> on. Thread-safe.</summary>
    /// <exception cref="Failures.OutputException">The disk is full or fails.</exception>
    public unsafe void Write(long firstElement, ReadOnlySpan<T> elements)
    {
        Preconditions.InRange(firstElement, 0, (ByteCount / sizeof(T)) - elements.Length);
        SafeFileHandle file = _file ?? throw new InvalidOperationException("The file has not been laid out yet.");
        ReadOnlySpan<T> rest = elements;
        long byteOffset = firstElement * sizeof(T);
        while (!rest.IsEmpty)
        {
            // Pieces that stay in the processor's cache between the checksum and the write.
            ReadOnlySpan<byte> piece = MemoryMarshal.AsBytes(rest[..Math.Min(rest.Length, (1 << 18) / sizeof(T))]);
            Checksums.Add(byteOffset, piece);
            WritePiece(file, piece, Offset + byteOffset);
            rest = rest[(piece.Length / sizeof(T))..];
            byteOffset += piece.Length;
        }

        if (elements.Length * (long)sizeof(T) >= WorthCarrying)
        {
            EarlyWriteback.Begin(file, Offset + (firstElement * sizeof(T)), elements.Length * (long)sizeof(T));
        }
    }

    private void WritePiece(SafeFileHandle file, ReadOnlySpan<byte> piece, long position)
    {
        try
        {
            RandomAccess.Write(file, piece, position);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw OutputFailures.Translate(_finalPath, e);
        }
    }
}
