using System.Runtime.InteropServices;
using SixLabors.ImageSharp;
using SixLabors.ImageSharp.Formats.Bmp;
using SixLabors.ImageSharp.Formats.Png;
using SixLabors.ImageSharp.PixelFormats;
using TmLab.Failures;
using TmLab.Quantities;
using TmLab.Shaping;

namespace TmLab.Storage.Images;

/// <summary>The file format of a modulator image.</summary>
public enum ModulatorImageFormat
{
    /// <summary>Portable Network Graphics, grey, without colour management chunks.</summary>
    Png,

    /// <summary>Windows bitmap, uncompressed, with a grey palette.</summary>
    Bmp,
}

/// <summary>Writes and reads modulator images without changing a level.</summary>
public static class ModulatorImageFile
{
    private const int LargestFileBytes = 1 << 30;

    /// <summary>Writes an image; reading it back gives the same levels. The stream must be seekable and stays open.</summary>
    public static void Write(ModulatorImage image, ModulatorImageFormat format, Stream stream)
    {
        if (image.Depth == ModulatorImageDepth.OneBit && format == ModulatorImageFormat.Bmp)
        {
            OneBitBmp.Write(image, stream);
            return;
        }

        // The library's one-bit grey PNG wants black and white as 0 and 255.
        byte[] levels = image.Depth == ModulatorImageDepth.OneBit ? [.. image.Levels.Select(l => (byte)(255 * l))] : [.. image.Levels];
        using Image<L8> pixels = Image.LoadPixelData<L8>(GrayImageCodecs.Configuration, levels, image.Size.Width, image.Size.Height);
        if (format == ModulatorImageFormat.Png)
        {
            pixels.Save(stream, Png(image.Depth));
        }
        else
        {
            pixels.Save(stream, new BmpEncoder { BitsPerPixel = BmpBitsPerPixel.Pixel8 });
        }
    }

    /// <summary>
    /// Reads a PNG (1-bit or 8-bit grey) or BMP (black and white or with grey palette or equal colours). One-bit files give levels 0
    /// and 1.
    /// </summary>
    /// <param name="stream">The file's content from its start.</param>
    /// <param name="name">The file's name for messages.</param>
    /// <exception cref="BadInputException">It is none of these, damaged, or not grey.</exception>
    public static ModulatorImage Read(Stream stream, string name)
    {
        byte[] file = ReadAll(stream, name);
        try
        {
            return PngHeader.IsPng(file) ? ReadPng(file, name) : ReadBmp(file, name);
        }
        catch (Exception failure) when (failure is ImageFormatException or InvalidImageContentException or UnknownImageFormatException
            or ImageProcessingException or IOException or ArgumentException or IndexOutOfRangeException or InvalidOperationException or NotSupportedException)
        {
            throw new BadInputException(name, null, "the image is damaged or of a kind that is not read", "save it as 8-bit grey PNG or BMP", failure);
        }
    }

    private static PngEncoder Png(ModulatorImageDepth depth) => new()
    {
        ColorType = PngColorType.Grayscale,
        BitDepth = depth == ModulatorImageDepth.OneBit ? PngBitDepth.Bit1 : PngBitDepth.Bit8,
        ChunkFilter = PngChunkFilter.ExcludeAll,
    };

    private static byte[] ReadAll(Stream stream, string name)
    {
        if (stream.CanSeek && stream.Length > LargestFileBytes)
        {
            throw new BadInputException(name, null, $"the file has {stream.Length} bytes, too many for a panel image", "check that it is the right file");
        }

        using var memory = new MemoryStream();
        stream.CopyTo(memory);
        return memory.ToArray();
    }

    private static ModulatorImage ReadPng(byte[] file, string name)
    {
        PngHeader header = PngHeader.Read(file, name);
        if (header.ColorType != 0 || header.BitDepth is not (1 or 8))
        {
            throw new BadInputException(name, "IHDR", $"colour type {header.ColorType} with {header.BitDepth} bits is not 1-bit or 8-bit grey", "save it as 8-bit grey PNG");
        }

        using Image<L8> image = Image.Load<L8>(GrayImageCodecs.Configuration, file, GrayImageCodecs.PngDecoder);
        byte[] levels = new byte[header.Size.PixelCount];
        image.CopyPixelDataTo(levels);
        return Make(header.Size, levels, header.BitDepth == 1);
    }

    private static ModulatorImage ReadBmp(byte[] file, string name)
    {
        IImageInfo? info = Image.Identify(GrayImageCodecs.Configuration, new MemoryStream(file));
        if (info is null || (long)info.Width * info.Height > GrayImageCodecs.MostPixels)
        {
            throw new BadInputException(name, null, "the file is neither PNG nor BMP, or claims an absurd size", "save it as 8-bit grey PNG or BMP");
        }

        // Through colour, so that a palette which is not grey shows instead of being turned into luminance.
        using Image<Rgb24> image = Image.Load<Rgb24>(GrayImageCodecs.Configuration, file, new BmpDecoder());
        var size = new ImageSize(info.Width, info.Height);
        var colours = new Rgb24[size.PixelCount];
        image.CopyPixelDataTo(colours);
        return Make(size, GrayOf(colours, size, name), info.PixelType.BitsPerPixel == 1);
    }

    private static byte[] GrayOf(Rgb24[] colours, ImageSize size, string name)
    {
        int coloured = Array.FindIndex(colours, c => c.R != c.G || c.G != c.B);
        return coloured < 0
            ? Array.ConvertAll(colours, c => c.R)
            : throw new BadInputException(name, $"pixel {coloured % size.Width},{coloured / size.Width}", "the image is coloured", "save it as 8-bit grey PNG or BMP");
    }

    private static ModulatorImage Make(ImageSize size, byte[] levels, bool isOneBit)
    {
        if (isOneBit)
        {
            levels = Array.ConvertAll(levels, l => (byte)(l > 127 ? 1 : 0));
        }

        return new ModulatorImage(
            size, ImmutableCollectionsMarshal.AsImmutableArray(levels), isOneBit ? ModulatorImageDepth.OneBit : ModulatorImageDepth.EightBit);
    }
}
