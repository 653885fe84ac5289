using System.Collections.Immutable;
using System.Numerics;
using System.Runtime.InteropServices;
using PureHDF;
using PureHDF.VOL.Native;
using TmLab.Failures;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Frames;

/// <summary>
/// Reads a complex or real matrix from an HDF5 dataset. Complex elements are compounds of two floating-point members named r and i,
/// re and im, or real and imag, in any order.
/// </summary>
internal static class Hdf5ComplexMatrix
{
    private static readonly (string Real, string Imaginary)[] MemberNames = [("r", "i"), ("re", "im"), ("real", "imag")];

    /// <summary>Reads rows × columns elements, row-major.</summary>
    public static ImmutableArray<Complex> Read(string path, string name, string dataset, int rows, int columns)
    {
        using NativeFile file = Hdf5Opening.Open(path, name);
        NativeDataset found = Hdf5Opening.Dataset(file, name, dataset);
        ulong[] shape = Hdf5Opening.Guarded(name, dataset, () => found.Space.Dimensions);
        if (!shape.SequenceEqual([(ulong)rows, (ulong)columns]))
        {
            throw CustomPatternFile.WrongShape(name, dataset, string.Join(", ", shape), rows, columns);
        }

        Complex[] matrix = Hdf5Opening.Guarded(name, dataset, () => ReadElements(found, name, dataset));
        return ImmutableCollectionsMarshal.AsImmutableArray(matrix);
    }

    private static Complex[] ReadElements(NativeDataset dataset, string name, string path)
    {
        IH5DataType type = dataset.Type;
        if (type.Class == H5DataTypeClass.FloatingPoint && type.Size is 4 or 8)
        {
            return type.Size == 4
                ? Array.ConvertAll(dataset.Read<float[]>(), v => new Complex(v, 0))
                : Array.ConvertAll(dataset.Read<double[]>(), v => new Complex(v, 0));
        }

        bool realFirst = RealComesFirst(type)
            ?? throw new BadInputException(name, path, "its elements are neither floating-point nor complex numbers", "save complex64, complex128, float32 or float64");
        return type.Size == 8
            ? Array.ConvertAll(dataset.Read<SinglePair[]>(), p => realFirst ? new Complex(p.First, p.Second) : new Complex(p.Second, p.First))
            : Array.ConvertAll(dataset.Read<DoublePair[]>(), p => realFirst ? new Complex(p.First, p.Second) : new Complex(p.Second, p.First));
    }

    /// <summary>Whether the real part is stored first; null when the type is no complex number of 8 or 16 bytes.</summary>
    private static bool? RealComesFirst(IH5DataType type)
    {
        if (type.Class != H5DataTypeClass.Compound || type.Size is not (8 or 16) || type.Compound.Members.Length != 2)
        {
            return null;
        }

        CompoundMember[] members = [.. type.Compound.Members.OrderBy(m => m.Offset)];
        if (Array.Exists(members, m => m.Type.Class != H5DataTypeClass.FloatingPoint || m.Type.Size != type.Size / 2))
        {
            return null;
        }

        (string, string) names = (members[0].Name, members[1].Name);
        return MemberNames.Contains(names) ? true : MemberNames.Contains((names.Item2, names.Item1)) ? false : null;
    }

    [StructLayout(LayoutKind.Sequential)]
    private struct SinglePair
    {
        public float First;
        public float Second;
    }

    [StructLayout(LayoutKind.Sequential)]
    private struct DoublePair
    {
        public double First;
        public double Second;
    }
}
