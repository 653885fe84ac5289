using System.Runtime.InteropServices;
using BitMiracle.LibTiff.Classic;
using SixLabors.ImageSharp;
using SixLabors.ImageSharp.Formats.Png;
using SixLabors.ImageSharp.PixelFormats;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Storage.Tests;

/// <summary>Frames of known counts, and writers that put them into each kind of file with libraries, not with this program.</summary>
internal static class SampleFrames
{
    /// <summary>Counts 0 … 2^bits − 1 that differ from frame to frame and pixel to pixel; both ends occur.</summary>
    public static ushort[][] Make(int frames, ImageSize size, int bits, int seed = 1)
    {
        var random = new Random(seed);
        ushort[][] made = [.. Enumerable.Range(0, frames).Select(_ =>
            Enumerable.Range(0, size.PixelCount).Select(_ => (ushort)random.Next(1 << bits)).ToArray())];
        made[0][0] = (ushort)((1 << bits) - 1);
        made[0][^1] = 0;
        return made;
    }

    public static ushort[][] ReadAll(IFrameSource source)
    {
        using (source)
        {
            return [.. Enumerable.Range(0, source.FrameCount).Select(_ =>
            {
                var frame = new ushort[source.FrameSize.PixelCount];
                source.ReadNext(frame);
                return frame;
            })];
        }
    }

    /// <summary>Writes a stack; the mode is "w" with "l" or "b" for the byte order and "8" for BigTIFF.</summary>
    public static void WriteTiff(
        string path, ushort[][] frames, ImageSize size, int bits, string mode = "w", Compression compression = Compression.NONE,
        int rowsPerStrip = 7, int tileSide = 0, string? description = null, int samples = 1, Predictor predictor = Predictor.NONE)
    {
        using Tiff tiff = Tiff.Open(path, mode);
        foreach (ushort[] frame in frames)
        {
            WritePage(tiff, frame, size, bits, compression, rowsPerStrip, tileSide, description, samples, predictor);
        }
    }

    public static void WritePng(string path, ushort[] frame, ImageSize size, int bits)
    {
        if (bits == 8)
        {
            byte[] bytes = Array.ConvertAll(frame, c => (byte)c);
            using Image<L8> small = Image.LoadPixelData<L8>(bytes, size.Width, size.Height);
            small.SaveAsPng(path, new PngEncoder { ColorType = PngColorType.Grayscale, BitDepth = PngBitDepth.Bit8 });
            return;
        }

        using Image<L16> image = Image.LoadPixelData<L16>(MemoryMarshal.AsBytes(frame.AsSpan()), size.Width, size.Height);
        image.SaveAsPng(path, new PngEncoder { ColorType = PngColorType.Grayscale, BitDepth = PngBitDepth.Bit16 });
    }

    /// <summary>Packs a row as TIFF wants it: whole bytes, 16-bit numbers, or 12 bits most significant first.</summary>
    private static byte[] Pack(ReadOnlySpan<ushort> row, int bits)
    {
        if (bits == 16)
        {
            return MemoryMarshal.AsBytes(row).ToArray();
        }

        byte[] packed = new byte[((row.Length * bits) + 7) / 8];
        for (int bit = 0; bit < row.Length * bits; bit++)
        {
            int value = (row[bit / bits] >> (bits - 1 - (bit % bits))) & 1;
            packed[bit / 8] |= (byte)(value << (7 - (bit % 8)));
        }

        return packed;
    }

    private static void WritePage(
        Tiff tiff, ushort[] frame, ImageSize size, int bits, Compression compression, int rowsPerStrip, int tileSide, string? description,
        int samples, Predictor predictor)
    {
        tiff.SetField(TiffTag.IMAGEWIDTH, size.Width);
        tiff.SetField(TiffTag.IMAGELENGTH, size.Height);
        tiff.SetField(TiffTag.BITSPERSAMPLE, bits);
        tiff.SetField(TiffTag.SAMPLESPERPIXEL, samples);
        tiff.SetField(TiffTag.PLANARCONFIG, PlanarConfig.CONTIG);
        tiff.SetField(TiffTag.PHOTOMETRIC, samples == 1 ? Photometric.MINISBLACK : Photometric.RGB);
        tiff.SetField(TiffTag.COMPRESSION, compression);
        if (predictor != Predictor.NONE)
        {
            tiff.SetField(TiffTag.PREDICTOR, predictor);
        }

        if (description is not null)
        {
            tiff.SetField(TiffTag.IMAGEDESCRIPTION, description);
        }

        if (tileSide > 0)
        {
            WriteTiles(tiff, frame, size, bits, tileSide);
        }
        else
        {
            tiff.SetField(TiffTag.ROWSPERSTRIP, rowsPerStrip);
            for (int y = 0; y < size.Height; y++)
            {
                ushort[] row = frame.AsSpan(y * size.Width, size.Width).ToArray();
                tiff.WriteScanline(Pack([.. row.SelectMany(c => Enumerable.Repeat(c, samples))], bits), y);
            }
        }

        tiff.WriteDirectory();
    }

    private static void WriteTiles(Tiff tiff, ushort[] frame, ImageSize size, int bits, int side)
    {
        tiff.SetField(TiffTag.TILEWIDTH, side);
        tiff.SetField(TiffTag.TILELENGTH, side);
        int tile = 0;
        for (int y = 0; y < size.Height; y += side)
        {
            for (int x = 0; x < size.Width; x += side)
            {
                byte[] bytes = [.. Enumerable.Range(y, side).SelectMany(row => Pack(
                    [.. Enumerable.Range(x, side).Select(column =>
                        row < size.Height && column < size.Width ? frame[(row * size.Width) + column] : (ushort)0)], bits))];
                tiff.WriteEncodedTile(tile++, bytes, bytes.Length);
            }
        }
    }
}
