using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Frames;

/// <summary>Frames back to back in one file behind a header of known length.</summary>
internal sealed class RawFrameSource : IFrameSource
{
    private readonly FileStream _stream;
    private readonly string _name;
    private readonly RawPixelFormat _format;
    private int _next;

    public RawFrameSource(string path, string name, ImageSize size, RawPixelFormat format, long headerBytes)
    {
        _name = name;
        _format = format;
        FrameSize = FrameSource.CheckedSize(size.Width, size.Height, name, "camera");
        _stream = InputFile.OpenSequential(path, name);
        try
        {
            FrameCount = Count(_stream.Length, headerBytes);
            _stream.Position = headerBytes;
        }
        catch
        {
            _stream.Dispose();
            throw;
        }
    }

    /// <inheritdoc/>
    public int FrameCount { get; }

    /// <inheritdoc/>
    public ImageSize FrameSize { get; }

    /// <inheritdoc/>
    public (string File, string Place) NextFrame => (_name, $"frame {_next}");

    private long FrameBytes => (long)FrameSize.PixelCount * RawPixels.BytesOf(_format);

    /// <inheritdoc/>
    public void ReadNext(Span<ushort> destination)
    {
        FrameSource.RequireNext(_next, FrameCount);
        Preconditions.AtLeast(destination.Length, FrameSize.PixelCount);
        try
        {
            RawPixels.Read(_stream, _format, destination[..FrameSize.PixelCount]);
        }
        catch (IOException failure)
        {
            throw new BadInputException(_name, $"frame {_next} of {FrameCount}", "the file cannot be read there, or shrank while it was read", "copy it again from the bench", failure);
        }

        _next++;
    }

    /// <inheritdoc/>
    public void Dispose() => _stream.Dispose();

    private int Count(long fileBytes, long headerBytes)
    {
        long frames = (fileBytes - headerBytes) / FrameBytes;
        long over = (fileBytes - headerBytes) % FrameBytes;
        if (fileBytes <= headerBytes || frames == 0 || frames > int.MaxValue)
        {
            throw new BadInputException(
                _name, null, $"the file has {fileBytes} bytes; a header of {headerBytes} and one frame of {FrameSize} need {headerBytes + FrameBytes}",
                "check camera.width, camera.height, frames.pixel and frames.header_bytes");
        }

        return over == 0
            ? (int)frames
            : throw new BadInputException(
                _name, null, $"{frames} frames of {FrameBytes} bytes leave {over} bytes over",
                "check camera.width, camera.height, frames.pixel and frames.header_bytes, or that the file was copied whole");
    }
}
