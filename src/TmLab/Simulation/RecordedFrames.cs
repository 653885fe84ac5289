using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>All frames of a simulated measurement in native memory, (frame, pixel). Readable from several threads.</summary>
public sealed class RecordedFrames : IFrameBlockReader
{
    private readonly NativeBuffer<ushort> _counts;

    internal RecordedFrames(int frameCount, ImageSize frameSize)
    {
        FrameCount = frameCount;
        FrameSize = frameSize;
        _counts = new NativeBuffer<ushort>((long)frameCount * frameSize.PixelCount);
    }

    /// <inheritdoc/>
    public int FrameCount { get; }

    /// <inheritdoc/>
    public ImageSize FrameSize { get; }

    /// <summary>One frame's counts, row-major.</summary>
    public ReadOnlySpan<ushort> Frame(int index) => Writable(index);

    /// <summary>One frame's counts, for the bench to fill in.</summary>
    internal Span<ushort> Writable(int index) => _counts.Slice((long)index * FrameSize.PixelCount, FrameSize.PixelCount);

    /// <inheritdoc/>
    public void Read(int firstFrame, int frameCount, int firstPixel, int pixelCount, Span<ushort> destination)
    {
        Preconditions.InRange(firstFrame, 0, FrameCount);
        Preconditions.InRange(frameCount, 0, FrameCount - firstFrame);
        Preconditions.InRange(firstPixel, 0, FrameSize.PixelCount);
        Preconditions.InRange(pixelCount, 0, FrameSize.PixelCount - firstPixel);
        Preconditions.AtLeast(destination.Length, (long)frameCount * pixelCount);
        for (int i = 0; i < frameCount; i++)
        {
            Frame(firstFrame + i).Slice(firstPixel, pixelCount).CopyTo(destination[(i * pixelCount)..]);
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _counts.Dispose();
}
