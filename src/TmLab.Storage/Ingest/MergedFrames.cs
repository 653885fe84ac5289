using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Storage.Ingest;

/// <summary>The frames of two recordings one after the other, without those of the first that are left out.</summary>
internal sealed class MergedFrames(IFrameSource first, bool[] keepOfFirst, IFrameSource second) : IFrameSource
{
    private readonly ushort[] _skipped = new ushort[first.FrameSize.PixelCount];
    private readonly int _keptOfFirst = keepOfFirst.Count(k => k);
    private int _nextOfFirst;
    private int _next;

    public int FrameCount => _keptOfFirst + second.FrameCount;

    public ImageSize FrameSize => first.FrameSize;

    public (string File, string Place) NextFrame => _next < _keptOfFirst ? first.NextFrame : second.NextFrame;

    public void ReadNext(Span<ushort> destination)
    {
        if (_next++ >= _keptOfFirst)
        {
            second.ReadNext(destination);
            return;
        }

        while (!keepOfFirst[_nextOfFirst++])
        {
            first.ReadNext(_skipped);
        }

        first.ReadNext(destination);
    }

    public void Dispose()
    {
        first.Dispose();
        second.Dispose();
    }
}
