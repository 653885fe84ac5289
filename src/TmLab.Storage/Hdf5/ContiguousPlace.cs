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
    /// <summary>The place of the first byte; null when the dataset is not stored as one run of bytes.</summary>
    /// <param name="dataset">The dataset; its type and byte order have been checked.</param>
    /// <param name="stream">The stream under the library.</param>
    public static unsafe long? Find<T>(NativeDataset dataset, ObservedStream stream)
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
        return last == first + ((count - 1) * sizeof(T)) ? first : null;
    }

    /// <summary>The place of a large dataset of ours, whichever of their element types it has.</summary>
    public static long? FindOurs(NativeDataset dataset, ObservedStream stream) =>
        dataset.Type.Class == H5DataTypeClass.Compound
            ? Find<Complex64>(dataset, stream)
            : Find<ushort>(dataset, stream);

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

    private static HyperslabSelection One(ulong[] index) =>
        new(index.Length, index, [.. Enumerable.Repeat(1UL, index.Length)]);
}
