using System.IO.Enumeration;
using SixLabors.ImageSharp;
using SixLabors.ImageSharp.PixelFormats;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;
using TmLab.Storage.Images;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Frames;

/// <summary>One image file a frame, in natural order of the names: 8-bit or 16-bit grey PNG, or single-page TIFF.</summary>
internal sealed class ImageFrameSource : IFrameSource
{
    private const long LargestFileBytes = 1L << 30;

    private readonly string[] _files;
    private readonly string _folderName;
    private int _next;

    public ImageFrameSource(string patternPath, string patternName)
    {
        _folderName = Path.GetDirectoryName(patternName.Replace('\\', '/')) ?? "";
        _files = Matching(patternPath, patternName);
        FrameSize = SizeOf(0);
    }

    /// <inheritdoc/>
    public int FrameCount => _files.Length;

    /// <inheritdoc/>
    public ImageSize FrameSize { get; }

    /// <inheritdoc/>
    public (string File, string Place) NextFrame => (NameOf(_next), $"frame {_next}");

    /// <inheritdoc/>
    public void ReadNext(Span<ushort> destination)
    {
        FrameSource.RequireNext(_next, FrameCount);
        Preconditions.AtLeast(destination.Length, FrameSize.PixelCount);
        string name = NameOf(_next);
        byte[] file = InputFile.ReadAll(_files[_next], name, LargestFileBytes);
        if (PngHeader.IsPng(file))
        {
            ReadPng(file, name, destination[..FrameSize.PixelCount]);
        }
        else
        {
            ReadTiff(_files[_next], name, destination);
        }

        _next++;
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        // Each file is closed when it has been read.
    }

    private static string[] Matching(string patternPath, string patternName)
    {
        string folder = Path.GetDirectoryName(patternPath)!;
        string pattern = Path.GetFileName(patternPath);
        if (folder.AsSpan().ContainsAny('*', '?'))
        {
            throw new BadInputException(patternName, null, "the folder's name holds a wildcard", "use * and ? in the file name only");
        }

        if (!Directory.Exists(folder))
        {
            throw new BadInputException(patternName, null, "there is no such folder", "check frames.path");
        }

        // Names that begin with a point are side files of file managers, not frames.
        string[] files = [.. Directory.EnumerateFiles(folder)
            .Where(f => FileSystemName.MatchesSimpleExpression(pattern, Path.GetFileName(f)) && !Path.GetFileName(f).StartsWith('.'))
            .Order(NaturalOrder.Instance)];
        return files.Length > 0
            ? files
            : throw new BadInputException(patternName, null, "no file matches the pattern", "check frames.path");
    }

    private string NameOf(int frame) => Path.Combine(_folderName, Path.GetFileName(_files[Math.Min(frame, _files.Length - 1)])).Replace('\\', '/');

    private ImageSize SizeOf(int frame)
    {
        string name = NameOf(frame);
        byte[] file = InputFile.ReadAll(_files[frame], name, LargestFileBytes);
        if (PngHeader.IsPng(file))
        {
            return PngHeader.Read(file, name).Size;
        }

        using var tiff = new TiffFrameSource([_files[frame]], [name]);
        return tiff.FrameSize;
    }

    private void CheckSize(ImageSize size, string name)
    {
        if (size != FrameSize)
        {
            throw new BadInputException(name, $"frame {_next}", $"the frame has {size} pixels, the first one {FrameSize}", "give frames of equal size");
        }
    }

    private void ReadPng(byte[] file, string name, Span<ushort> destination)
    {
        PngHeader header = PngHeader.Read(file, name);
        if (header.ColorType != 0 || header.BitDepth is not (8 or 16))
        {
            string found = header.ColorType == 0 ? $"{header.BitDepth}-bit grey" : "coloured, paletted or with transparency";
            throw new BadInputException(name, $"frame {_next}", $"the image is {found}", "save frames as 8-bit or 16-bit grey PNG");
        }

        CheckSize(header.Size, name);
        try
        {
            DecodePng(file, header.BitDepth, destination);
        }
        catch (Exception failure) when (failure is ImageFormatException or ImageProcessingException or IOException or ArgumentException
            or IndexOutOfRangeException or InvalidOperationException or NotSupportedException)
        {
            throw new BadInputException(name, $"frame {_next}", "the image is damaged", "copy the file again from the bench", failure);
        }
    }

    private static void DecodePng(byte[] file, int bitDepth, Span<ushort> destination)
    {
        if (bitDepth == 8)
        {
            using Image<L8> bytes = Image.Load<L8>(GrayImageCodecs.Configuration, file, GrayImageCodecs.PngDecoder);
            byte[] levels = new byte[destination.Length];
            bytes.CopyPixelDataTo(levels);
            RawPixels.Widen(levels, destination);
            return;
        }

        using Image<L16> words = Image.Load<L16>(GrayImageCodecs.Configuration, file, GrayImageCodecs.PngDecoder);
        words.CopyPixelDataTo(System.Runtime.InteropServices.MemoryMarshal.Cast<ushort, L16>(destination));
    }

    private void ReadTiff(string path, string name, Span<ushort> destination)
    {
        using var tiff = new TiffFrameSource([path], [name]);
        if (tiff.FrameCount != 1)
        {
            throw new BadInputException(name, $"frame {_next}", $"the file holds {tiff.FrameCount} pages", "give one frame a file, or use frames of kind \"tiff\"");
        }

        CheckSize(tiff.FrameSize, name);
        tiff.ReadNext(destination);
    }
}
