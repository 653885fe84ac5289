using System.Globalization;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>A bench's frames from front to back, rendered in small batches so that several threads have work.</summary>
internal sealed class VirtualFrameSource(VirtualBench bench, int threads) : IFrameSource
{
    private const int BatchFrames = 32;

    private readonly ParallelOptions _options = BenchThreads.Options(threads, CancellationToken.None);
    private readonly ushort[] _batch = new ushort[BatchFrames * bench.FrameSize.PixelCount];
    private int _next;

    public int FrameCount => bench.FrameCount;

    public ImageSize FrameSize => bench.FrameSize;

    public (string File, string Place) NextFrame =>
        ("virtual bench", string.Create(CultureInfo.InvariantCulture, $"frame {_next}"));

    public void ReadNext(Span<ushort> destination)
    {
        if (_next >= FrameCount)
        {
            throw new InvalidOperationException("There is no further frame.");
        }

        int pixels = FrameSize.PixelCount;
        int inBatch = _next % BatchFrames;
        if (inBatch == 0)
        {
            RenderBatch();
        }

        _batch.AsSpan(inBatch * pixels, pixels).CopyTo(destination);
        _next++;
    }

    public void Dispose()
    {
    }

    private void RenderBatch()
    {
        int pixels = FrameSize.PixelCount;
        int first = _next;
        Parallel.For(0, Math.Min(BatchFrames, FrameCount - first), _options, i =>
            bench.Render(first + i, _batch.AsSpan(i * pixels, pixels)));
    }
}
