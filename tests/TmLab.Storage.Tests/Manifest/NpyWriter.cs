using System.Numerics;
using System.Text;

namespace TmLab.Storage.Tests.Manifest;

/// <summary>Writes array files after NumPy Enhancement Proposal 1 (format version 1.0).</summary>
internal static class NpyWriter
{
    public static void Write(string path, Complex[] matrix, int rows, int columns, string type, bool isFortran)
    {
        string header = $"{{'descr': '{type}', 'fortran_order': {(isFortran ? "True" : "False")}, 'shape': ({rows}, {columns}), }}";
        header = header.PadRight(((header.Length + 11 + 63) / 64 * 64) - 11) + "\n";
        using FileStream stream = File.Create(path);
        stream.Write([0x93, .. "NUMPY"u8, 1, 0, (byte)header.Length, (byte)(header.Length >> 8), .. Encoding.ASCII.GetBytes(header)]);
        for (int i = 0; i < matrix.Length; i++)
        {
            Complex element = isFortran ? matrix[((i % rows) * columns) + (i / rows)] : matrix[i];
            WritePart(stream, element.Real, type);
            if (type[1] == 'c')
            {
                WritePart(stream, element.Imaginary, type);
            }
        }
    }

    private static void WritePart(Stream stream, double value, string type)
    {
        byte[] bytes = type[1..] is "c8" or "f4" ? BitConverter.GetBytes((float)value) : BitConverter.GetBytes(value);
        if (type[0] == '>')
        {
            Array.Reverse(bytes);
        }

        stream.Write(bytes);
    }
}
