using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.TestKit;

/// <summary>Frames held in memory, shape (frame, pixel).</summary>
public sealed class InMemoryFrames(ushort[][] frames, ImageSize size) : IFrameBlockReader
{
    public int FrameCount => frames.Length;

    public ImageSize FrameSize => size;

    public void Read(int firstFrame, int frameCount, int firstPixel, int pixelCount, Span<ushort> destination)
    {
        for (int f = 0; f < frameCount; f++)
        {
            frames[firstFrame + f].AsSpan(firstPixel, pixelCount).CopyTo(destination[(f * pixelCount)..]);
        }
    }

    public void Dispose()
    {
        // Nothing is held.
    }
}
