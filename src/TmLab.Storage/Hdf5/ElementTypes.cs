using System.Runtime.InteropServices;
using PureHDF;
using TmLab.Failures;
using TmLab.Numerics.Matrices;

namespace TmLab.Storage.Hdf5;

/// <summary>Complex numbers of two doubles as they stand in a file.</summary>
[StructLayout(LayoutKind.Sequential, Pack = 8)]
internal struct StoredComplex128
{
    /// <summary>The real part.</summary>
    public double r;

    /// <summary>The imaginary part.</summary>
    public double i;
}

/// <summary>
/// Compares the type of stored elements with the one that is wanted. The HDF5 library compares no more than sizes, and copies the
/// members of complex numbers in whatever order they stand.
/// </summary>
internal static class ElementTypes
{
    private static readonly (string Real, string Imaginary)[] s_complexNames = [("r", "i"), ("re", "im"), ("real", "imag")];

    /// <summary>Requires elements of type <typeparamref name="T"/>. Returns whether they are complex with the imaginary part first.</summary>
    /// <exception cref="BadInputException">The elements are of another type.</exception>
    public static unsafe bool RequireAndTellSwapped<T>(string file, string place, IH5DataType type)
        where T : unmanaged
    {
        if (typeof(T) == typeof(Complex64) || typeof(T) == typeof(StoredComplex128))
        {
            return ComplexIsSwapped(type, sizeof(T) / 2) ?? throw Wrong<T>(file, place, type);
        }

        bool isFloating = typeof(T) == typeof(float) || typeof(T) == typeof(double);
        bool isSigned = typeof(T) == typeof(int) || typeof(T) == typeof(long);
        bool fits = isFloating
            ? type.Class == H5DataTypeClass.FloatingPoint
            : type.Class == H5DataTypeClass.FixedPoint && type.FixedPoint.IsSigned == isSigned;
        return fits && type.Size == sizeof(T) ? false : throw Wrong<T>(file, place, type);
    }

    /// <summary>A stored type in the words of common numerical programs, such as <c>uint16</c> or <c>complex64</c>.</summary>
    public static string Name(IH5DataType type) => type.Class switch
    {
        H5DataTypeClass.FixedPoint => $"{(type.FixedPoint.IsSigned ? "int" : "uint")}{type.Size * 8}",
        H5DataTypeClass.FloatingPoint => $"float{type.Size * 8}",
        H5DataTypeClass.Compound when ComplexIsSwapped(type, 4) is not null => "complex64",
        H5DataTypeClass.Compound when ComplexIsSwapped(type, 8) is not null => "complex128",
        H5DataTypeClass.String or H5DataTypeClass.VariableLength => "text",
        H5DataTypeClass other => $"{other.ToString().ToLowerInvariant()} of {type.Size} bytes",
    };

    /// <summary>Exchanges the two halves of each element.</summary>
    public static void SwapParts<T>(Span<T> elements)
        where T : unmanaged
    {
        if (typeof(T) == typeof(Complex64))
        {
            SwapPairs(MemoryMarshal.Cast<T, float>(elements));
        }
        else
        {
            SwapPairs(MemoryMarshal.Cast<T, double>(elements));
        }
    }

    private static void SwapPairs<TPart>(Span<TPart> parts)
    {
        for (int k = 0; k + 1 < parts.Length; k += 2)
        {
            (parts[k], parts[k + 1]) = (parts[k + 1], parts[k]);
        }
    }

    private static bool? ComplexIsSwapped(IH5DataType type, int partBytes)
    {
        if (type.Class != H5DataTypeClass.Compound
            || type.Size != 2 * partBytes
            || type.Compound.Members is not [var a, var b]
            || a.Type.Class != H5DataTypeClass.FloatingPoint || a.Type.Size != partBytes
            || b.Type.Class != H5DataTypeClass.FloatingPoint || b.Type.Size != partBytes)
        {
            return null;
        }

        (CompoundMember first, CompoundMember second) = a.Offset <= b.Offset ? (a, b) : (b, a);
        if (first.Offset != 0 || second.Offset != partBytes)
        {
            return null;
        }

        return s_complexNames.Contains((first.Name, second.Name)) ? false
            : s_complexNames.Contains((second.Name, first.Name)) ? true
            : null;
    }

    private static BadInputException Wrong<T>(string file, string place, IH5DataType type) =>
        new(file, place, $"holds {Name(type)}, needed {Wanted<T>()}", "convert the dataset or name another file");

    private static string Wanted<T>() => default(T) switch
    {
        Complex64 => "complex64 with members r and i",
        StoredComplex128 => "complex128 with members r and i",
        ushort => "uint16",
        byte => "uint8",
        int => "int32",
        uint => "uint32",
        float => "float32",
        double => "float64",
        _ => typeof(T).Name,
    };
}
