using System.Buffers.Binary;
using TmLab.Failures;
using TmLab.Quantities;

namespace TmLab.Storage.Images;

/// <summary>
/// What a PNG file says of itself, read chunk by chunk without decoding (PNG specification, third edition, W3C 2025, §5 and §11.2.1).
/// The decoder fills missing rows with zeros in silence; the walk to the closing IEND chunk is what tells a file cut short.
/// </summary>
/// <param name="Size">The image's size.</param>
/// <param name="BitDepth">Bits a sample.</param>
/// <param name="ColorType">0 grey, 2 colour, 3 palette, 4 grey with alpha, 6 colour with alpha.</param>
internal readonly record struct PngHeader(ImageSize Size, int BitDepth, int ColorType)
{
    private const int ChunkFrameBytes = 12;
    private static ReadOnlySpan<byte> Signature => [0x89, (byte)'P', (byte)'N', (byte)'G', 0x0D, 0x0A, 0x1A, 0x0A];

    /// <summary>Whether a file's first bytes are those of a PNG.</summary>
    public static bool IsPng(ReadOnlySpan<byte> start) => start.StartsWith(Signature);

    /// <summary>Reads the header and walks the chunks to the end.</summary>
    /// <exception cref="BadInputException">The file is no PNG, cut short or claims an absurd size.</exception>
    public static PngHeader Read(ReadOnlySpan<byte> file, string name)
    {
        if (!IsPng(file) || file.Length < Signature.Length + ChunkFrameBytes + 13)
        {
            throw new BadInputException(name, null, "the file is not a PNG image", "save it as 8-bit or 16-bit grey PNG");
        }

        PngHeader header = ReadIhdr(file[(Signature.Length + 8)..], name);
        int at = Signature.Length;
        while (true)
        {
            long length = at + ChunkFrameBytes <= file.Length ? BinaryPrimitives.ReadUInt32BigEndian(file[at..]) : long.MaxValue;
            if (length > file.Length - at - ChunkFrameBytes)
            {
                throw new BadInputException(name, $"byte {at}", $"the image is cut short: the file ends at byte {file.Length}", "copy the file again from the bench");
            }

            if (file.Slice(at + 4, 4).SequenceEqual("IEND"u8))
            {
                return header;
            }

            at += (int)length + ChunkFrameBytes;
        }
    }

    private static PngHeader ReadIhdr(ReadOnlySpan<byte> ihdr, string name)
    {
        uint width = BinaryPrimitives.ReadUInt32BigEndian(ihdr);
        uint height = BinaryPrimitives.ReadUInt32BigEndian(ihdr[4..]);
        if (width is 0 or > int.MaxValue || height is 0 or > int.MaxValue || (long)width * height > GrayImageCodecs.MostPixels)
        {
            throw new BadInputException(name, "IHDR", $"the image claims {width} × {height} pixels", "check that the file is undamaged");
        }

        return new PngHeader(new ImageSize((int)width, (int)height), ihdr[8], ihdr[9]);
    }
}
