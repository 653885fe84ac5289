using System.Runtime.InteropServices;
using Microsoft.Win32.SafeHandles;
using PureHDF;
using PureHDF.Selections;
using PureHDF.VOL.Native;
using TmLab.Numerics.Matrices;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// Finds where in a file a contiguous dataset stands, which the HDF5 library knows but does not tell: the library reads the
/// first and the last element, and the stream under it notes from where.
/// </summary>
internal static class ContiguousPlace
{
    /// <summary>The place of the first byte; null when the dataset cannot be read as one run of little-endian elements.</summary>
    /// <param name="dataset">The dataset; its type has been checked.</param>
    /// <param name="stream">The stream under the library.</param>
    /// <param name="file">The same file.</param>
    /// <param name="knownLittleEndian">Whether the byte order needs no check: a file of ours whose headers are sound.</param>
    public static unsafe long? Find<T>(NativeDataset dataset, ObservedStream stream, SafeFileHandle file, bool knownLittleEndian)
        where T : unmanaged
    {
        if (dataset.Layout.Class != H5DataLayoutClass.Contiguous)
        {
            return null;
        }

        ulong[] dimensions = dataset.Space.Dimensions;
        long count = dimensions.Aggregate(1L, (a, b) => checked(a * (long)b));
        if (count == 0 || WhereRead<T>(dataset, stream, new ulong[dimensions.Length]) is not { } first)
        {
            return null;
        }

        long? last = WhereRead<T>(dataset, stream, [.. dimensions.Select(d => d - 1)]);
        bool isOneRun = last == first + ((count - 1) * sizeof(T));
        return isOneRun && (knownLittleEndian || IsLittleEndian<T>(dataset, file, first, count)) ? first : null;
    }

    /// <summary>The place of a large dataset of ours, whichever of their element types it has.</summary>
    public static long? FindOurs(NativeDataset dataset, ObservedStream stream, SafeFileHandle file) =>
        dataset.Type.Class == H5DataTypeClass.Compound
            ? Find<Complex64>(dataset, stream, file, knownLittleEndian: true)
            : Find<ushort>(dataset, stream, file, knownLittleEndian: true);

    private static unsafe long? WhereRead<T>(NativeDataset dataset, ObservedStream stream, ulong[] index)
        where T : unmanaged
    {
        var transfers = new List<(long Position, int Length)>();
        stream.Transfers = transfers;
        try
        {
            _ = dataset.Read<T[]>(fileSelection: One(index));
        }
        finally
        {
            stream.Transfers = null;
        }

        return transfers is [.., (long position, int length)] && length == sizeof(T) ? position : null;
    }

    // The byte order is not to be had from the library either, but it decodes by it: an element whose bytes read the same both ways
    // tells nothing, any other one tells all.
    private static unsafe bool IsLittleEndian<T>(NativeDataset dataset, SafeFileHandle file, long offset, long count)
        where T : unmanaged
    {
        T[] raw = new T[(int)Math.Min(count, 64 * 1024)];
        for (long start = 0; start < count; start += raw.Length)
        {
            Span<T> block = raw.AsSpan(0, (int)Math.Min(raw.Length, count - start));
            _ = RandomAccess.Read(file, MemoryMarshal.AsBytes(block), offset + (start * sizeof(T)));
            for (int k = 0; k < block.Length; k++)
            {
                if (TellsByteOrder(block[k]))
                {
                    return DecodesTo(dataset, Index(start + k, dataset.Space.Dimensions), block[k]);
                }
            }
        }

        return true;
    }

    private static unsafe bool TellsByteOrder<T>(T element)
        where T : unmanaged
    {
        int partBytes = IsComplex<T>() ? sizeof(T) / 2 : sizeof(T);
        Span<byte> bytes = new(&element, sizeof(T));
        Span<byte> mirrored = stackalloc byte[sizeof(T)];
        bytes.CopyTo(mirrored);
        for (int part = 0; part < sizeof(T); part += partBytes)
        {
            mirrored.Slice(part, partBytes).Reverse();
        }

        return !bytes.SequenceEqual(mirrored);
    }

    private static bool DecodesTo<T>(NativeDataset dataset, ulong[] index, T raw)
        where T : unmanaged
    {
        if (!IsComplex<T>())
        {
            return dataset.Read<T[]>(fileSelection: One(index))[0].Equals(raw);
        }

        // Compounds are copied raw when read into a struct, and decoded member by member when read into a dictionary.
        Dictionary<string, object?> decoded = dataset.Read<Dictionary<string, object?>[]>(fileSelection: One(index))[0];
        object?[] parts = [.. dataset.Type.Compound.Members.OrderBy(m => m.Offset).Select(m => decoded[m.Name])];
        return raw switch
        {
            Complex64 c => c.r.Equals(parts[0]) && c.i.Equals(parts[1]),
            StoredComplex128 c => c.r.Equals(parts[0]) && c.i.Equals(parts[1]),
            _ => false,
        };
    }

    private static bool IsComplex<T>() => typeof(T) == typeof(Complex64) || typeof(T) == typeof(StoredComplex128);

    private static HyperslabSelection One(ulong[] index) =>
        new(index.Length, index, [.. Enumerable.Repeat(1UL, index.Length)]);

    private static ulong[] Index(long element, ulong[] dimensions)
    {
        ulong[] index = new ulong[dimensions.Length];
        ulong rest = (ulong)element;
        for (int axis = dimensions.Length - 1; axis >= 0; axis--)
        {
            index[axis] = rest % dimensions[axis];
            rest /= dimensions[axis];
        }

        return index;
    }
}
