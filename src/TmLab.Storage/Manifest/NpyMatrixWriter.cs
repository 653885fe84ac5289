using System.Globalization;
using System.Numerics;
using System.Runtime.InteropServices;
using System.Text;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Storage.Manifest;

/// <summary>Writes matrices as NumPy array files, format version 1.0, C order, little-endian (NumPy Enhancement Proposal 1).</summary>
public static class NpyMatrixWriter
{
    private const int Alignment = 64;
    private const int PreambleBytes = 10;

    /// <summary>Writes complex64 elements.</summary>
    public static void Write(Stream stream, ComplexMatrix matrix)
    {
        WriteHeader(stream, "<c8", matrix.Rows, matrix.Columns);
        for (int row = 0; row < matrix.Rows; row++)
        {
            stream.Write(MemoryMarshal.AsBytes(matrix.Row(row)));
        }
    }

    /// <summary>Writes complex128 elements of a row-major matrix.</summary>
    public static void Write(Stream stream, ReadOnlySpan<Complex> elements, int rows, int columns)
    {
        Preconditions.SameLength(elements.Length, (long)rows * columns);
        WriteHeader(stream, "<c16", rows, columns);
        foreach (ref readonly Complex element in elements)
        {
            stream.Write(MemoryMarshal.AsBytes(MemoryMarshal.CreateReadOnlySpan(in element, 1)));
        }
    }

    private static void WriteHeader(Stream stream, string type, int rows, int columns)
    {
        Preconditions.Require(BitConverter.IsLittleEndian, "Array files are written on little-endian machines only.");
        string header = string.Create(
            CultureInfo.InvariantCulture, $"{{'descr': '{type}', 'fortran_order': False, 'shape': ({rows}, {columns}), }}");
        int length = ((PreambleBytes + header.Length + 1 + Alignment - 1) / Alignment * Alignment) - PreambleBytes;
        stream.Write([0x93, .. "NUMPY"u8, 1, 0, (byte)length, (byte)(length >> 8)]);
        stream.Write(Encoding.ASCII.GetBytes(header.PadRight(length - 1) + "\n"));
    }
}
