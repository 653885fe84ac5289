using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.Benchmarks;

/// <summary>Frames in native memory, shape (frame, pixel), filled with a fixed sequence of 13-bit counts.</summary>
internal sealed class CountsInMemory : IFrameBlockReader
{
    private readonly NativeBuffer<ushort> _counts;

    public CountsInMemory(int frameCount, ImageSize size)
    {
        FrameCount = frameCount;
        FrameSize = size;
        _counts = new NativeBuffer<ushort>((long)frameCount * size.PixelCount);
        var random = new Random(1);
        for (int frame = 0; frame < frameCount; frame++)
        {
            foreach (ref ushort count in Frame(frame))
            {
                count = (ushort)random.Next(1 << 13);
            }
        }
    }

    public int FrameCount { get; }

    public ImageSize FrameSize { get; }

    public void Read(int firstFrame, int frameCount, int firstPixel, int pixelCount, Span<ushort> destination)
    {
        for (int f = 0; f < frameCount; f++)
        {
            Frame(firstFrame + f).Slice(firstPixel, pixelCount).CopyTo(destination[(f * pixelCount)..]);
        }
    }

    public void Dispose() => _counts.Dispose();

    private Span<ushort> Frame(int frame) => _counts.Slice((long)frame * FrameSize.PixelCount, FrameSize.PixelCount);
}
