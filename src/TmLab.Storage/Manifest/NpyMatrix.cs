using System.Buffers.Binary;
using System.Collections.Immutable;
using System.Globalization;
using System.Numerics;
using System.Runtime.InteropServices;
using System.Text;
using System.Text.RegularExpressions;
using TmLab.Failures;

namespace TmLab.Storage.Manifest;

/// <summary>
/// Reads a matrix of numbers from a NumPy array file (format versions 1 to 3; NumPy Enhancement Proposal 1): complex64, complex128,
/// float32 or float64, either byte order, C or Fortran order.
/// </summary>
internal static partial class NpyMatrix
{
    private const int LongestHeader = 1 << 16;

    private static ReadOnlySpan<byte> Magic => [0x93, (byte)'N', (byte)'U', (byte)'M', (byte)'P', (byte)'Y'];

    /// <summary>Reads rows × columns elements, row-major.</summary>
    /// <exception cref="BadInputException">It is no such file, of another shape or type, or cut short.</exception>
    public static ImmutableArray<Complex> Read(Stream stream, string name, int rows, int columns)
    {
        try
        {
            string header = ReadHeader(stream, name);
            (bool isComplex, int partBytes, bool isBigEndian) = ParseType(header, name);
            CheckShape(header, name, rows, columns);
            double[] parts = ReadParts(stream, name, (long)rows * columns * (isComplex ? 2 : 1), partBytes, isBigEndian);
            bool isFortran = FortranOrder().IsMatch(header);
            var matrix = new Complex[(long)rows * columns];
            for (int i = 0; i < matrix.Length; i++)
            {
                int from = isFortran ? ((i % columns) * rows) + (i / columns) : i;
                matrix[i] = isComplex ? new Complex(parts[2 * from], parts[(2 * from) + 1]) : parts[from];
            }

            return ImmutableCollectionsMarshal.AsImmutableArray(matrix);
        }
        catch (EndOfStreamException cutShort)
        {
            throw new BadInputException(name, null, "the array file is cut short", "write it again", cutShort);
        }
    }

    private static string ReadHeader(Stream stream, string name)
    {
        Span<byte> start = stackalloc byte[8];
        stream.ReadExactly(start);
        if (!start[..6].SequenceEqual(Magic))
        {
            throw new BadInputException(name, null, "the file is not a NumPy array file", "save the patterns as .npy, or name the dataset when it is HDF5");
        }

        Span<byte> length = stackalloc byte[4];
        length.Clear();
        stream.ReadExactly(length[..(start[6] == 1 ? 2 : 4)]);
        uint headerBytes = BinaryPrimitives.ReadUInt32LittleEndian(length);
        if (headerBytes > LongestHeader)
        {
            throw new BadInputException(name, "header", $"the header claims {headerBytes} bytes", "write the file again");
        }

        byte[] header = new byte[headerBytes];
        stream.ReadExactly(header);
        return Encoding.UTF8.GetString(header);
    }

    private static (bool IsComplex, int PartBytes, bool IsBigEndian) ParseType(string header, string name)
    {
        Match type = Descriptor().Match(header);
        string word = type.Success ? type.Groups[1].Value : "unknown";
        return word.Length == 0 || word[1..] is not ("c8" or "c16" or "f4" or "f8")
            ? throw new BadInputException(name, "header", $"the element type is {word}", "save complex64, complex128, float32 or float64")
            : (word[1] == 'c', word[1..] is "c8" or "f4" ? 4 : 8, word[0] == '>');
    }

    private static void CheckShape(string header, string name, int rows, int columns)
    {
        Match shape = Shape().Match(header);
        string found = shape.Success ? shape.Groups[1].Value.Trim().TrimEnd(',') : "unknown";
        string[] sides = found.Split(',', StringSplitOptions.TrimEntries);
        bool isRight = sides.Length == 2
            && sides[0] == rows.ToString(CultureInfo.InvariantCulture) && sides[1] == columns.ToString(CultureInfo.InvariantCulture);
        if (!isRight)
        {
            throw CustomPatternFile.WrongShape(name, "header", found, rows, columns);
        }
    }

    private static double[] ReadParts(Stream stream, string name, long count, int partBytes, bool isBigEndian)
    {
        long available = stream.Length - stream.Position;
        if (available < count * partBytes || count > int.MaxValue / 2)
        {
            throw new BadInputException(name, null, $"{available} bytes follow the header, {count * partBytes} are needed: the file is cut short", "write it again");
        }

        double[] parts = new double[count];
        Span<byte> part = stackalloc byte[8];
        for (long i = 0; i < count; i++)
        {
            Span<byte> bytes = part[..partBytes];
            stream.ReadExactly(bytes);
            parts[i] = (partBytes, isBigEndian) switch
            {
                (4, false) => BinaryPrimitives.ReadSingleLittleEndian(bytes),
                (4, true) => BinaryPrimitives.ReadSingleBigEndian(bytes),
                (_, false) => BinaryPrimitives.ReadDoubleLittleEndian(bytes),
                _ => BinaryPrimitives.ReadDoubleBigEndian(bytes),
            };
        }

        return parts;
    }

    [GeneratedRegex("'descr'\\s*:\\s*'([<>=|][a-z]\\d+)'")]
    private static partial Regex Descriptor();

    [GeneratedRegex("'shape'\\s*:\\s*\\(([^)]*)\\)")]
    private static partial Regex Shape();

    [GeneratedRegex("'fortran_order'\\s*:\\s*True")]
    private static partial Regex FortranOrder();
}
