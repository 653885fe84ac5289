using System.Buffers.Binary;
using TmLab.Quantities;
using TmLab.Shaping;

namespace TmLab.Storage.Images;

/// <summary>
/// Writes one-bit Windows bitmaps (BITMAPINFOHEADER, uncompressed): rows from bottom to top, most significant bit leftmost, padded to
/// four bytes, palette entry 0 black and 1 white.
/// </summary>
internal static class OneBitBmp
{
    private const int HeaderBytes = 14 + 40 + 8;

    public static void Write(ModulatorImage image, Stream stream)
    {
        ImageSize size = image.Size;
        int rowBytes = ((size.Width + 31) / 32) * 4;
        stream.Write(Header(size, rowBytes));
        byte[] row = new byte[rowBytes];
        for (int y = size.Height - 1; y >= 0; y--)
        {
            Pack(image.Levels.AsSpan().Slice(y * size.Width, size.Width), row);
            stream.Write(row);
        }
    }

    private static byte[] Header(ImageSize size, int rowBytes)
    {
        byte[] header = new byte[HeaderBytes];
        "BM"u8.CopyTo(header);
        void Put(int at, int value) => BinaryPrimitives.WriteInt32LittleEndian(header.AsSpan(at), value);
        int pixelBytes = checked(rowBytes * size.Height);
        Put(2, checked(HeaderBytes + pixelBytes));
        Put(10, HeaderBytes);
        Put(14, 40);
        Put(18, size.Width);
        Put(22, size.Height);
        header[26] = 1;
        header[28] = 1;
        Put(34, pixelBytes);
        Put(46, 2);
        Put(58, 0x00FFFFFF);
        return header;
    }

    private static void Pack(ReadOnlySpan<byte> levels, Span<byte> row)
    {
        row.Clear();
        for (int x = 0; x < levels.Length; x++)
        {
            row[x >> 3] |= (byte)(levels[x] << (7 - (x & 7)));
        }
    }
}
