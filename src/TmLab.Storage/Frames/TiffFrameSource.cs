using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Frames;

/// <summary>The pages of one or several TIFF files, in order.</summary>
internal sealed class TiffFrameSource : IFrameSource
{
    private readonly ImmutableArray<(string Path, string Name, TiffStructure Structure)> _files;
    private FileStream? _stream;
    private TiffPageDecoder? _decoder;
    private int _file;
    private int _page;
    private int _next;

    /// <summary>Finds the pages of all files.</summary>
    public TiffFrameSource(IReadOnlyList<string> paths, IReadOnlyList<string> names)
    {
        _files = [.. paths.Zip(names, (path, name) => (path, name, ReadStructure(path, name)))];
        FrameSize = _files[0].Structure.FrameSize;
        foreach ((_, string name, TiffStructure structure) in _files)
        {
            if (structure.FrameSize != FrameSize)
            {
                throw new BadInputException(name, "page 0", $"its pages have {structure.FrameSize} pixels, those of {names[0]} {FrameSize}", "give frames of equal size");
            }
        }

        FrameCount = checked(_files.Sum(f => f.Structure.FrameCount));
    }

    /// <inheritdoc/>
    public int FrameCount { get; }

    /// <inheritdoc/>
    public ImageSize FrameSize { get; }

    /// <inheritdoc/>
    public (string File, string Place) NextFrame
    {
        get
        {
            bool fileIsDone = _page >= Current.Structure.FrameCount && _file + 1 < _files.Length;
            return fileIsDone ? (_files[_file + 1].Name, "page 0") : (Current.Name, $"page {_page}");
        }
    }

    private (string Path, string Name, TiffStructure Structure) Current => _files[_file];

    /// <inheritdoc/>
    public void ReadNext(Span<ushort> destination)
    {
        FrameSource.RequireNext(_next, FrameCount);
        Preconditions.AtLeast(destination.Length, FrameSize.PixelCount);
        if (_page >= Current.Structure.FrameCount)
        {
            CloseFile();
            _file++;
            _page = 0;
        }

        _stream ??= InputFile.OpenSequential(Current.Path, Current.Name, bufferBytes: 4096);
        ReadPage(_stream, destination[..FrameSize.PixelCount]);
        _page++;
        _next++;
    }

    /// <inheritdoc/>
    public void Dispose() => CloseFile();

    private static TiffStructure ReadStructure(string path, string name)
    {
        using FileStream stream = InputFile.OpenSequential(path, name, bufferBytes: 512);
        try
        {
            return TiffStructure.Read(stream, name);
        }
        catch (IOException failure)
        {
            throw new BadInputException(name, null, "the file cannot be read", "copy it again from the bench", failure);
        }
    }

    private void ReadPage(FileStream stream, Span<ushort> destination)
    {
        TiffStructure structure = Current.Structure;
        if (structure.RawOffset(_page) is { } offset)
        {
            ReadRaw(stream, structure, offset, destination);
            return;
        }

        _decoder ??= new TiffPageDecoder(stream, Current.Name, structure);
        _decoder.Read(_page, destination);
    }

    private void ReadRaw(FileStream stream, TiffStructure structure, long offset, Span<ushort> destination)
    {
        RawPixelFormat format = (structure.Format.Bits, structure.IsBigEndian) switch
        {
            (8, _) => RawPixelFormat.UInt8,
            (_, false) => RawPixelFormat.UInt16LittleEndian,
            _ => RawPixelFormat.UInt16BigEndian,
        };
        stream.Position = offset;
        try
        {
            RawPixels.Read(stream, format, destination);
        }
        catch (IOException failure)
        {
            throw new BadInputException(Current.Name, $"page {_page}", "the file shrank while it was read", "copy it again from the bench", failure);
        }
    }

    private void CloseFile()
    {
        _decoder?.Dispose();
        _stream?.Dispose();
        _decoder = null;
        _stream = null;
    }
}
