using TmLab.Measurement.Bases;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;

namespace TmLab.Reconstruction;

/// <summary>
/// The fused kernel of reconstruction, counts in and matrix rows out, a few pixels (lanes) at a time so that the planes stay in
/// the second-level cache: demodulation with the drift factor in its weights, inverse basis, row scale, interleaving. Owns its
/// buffers: one a thread.
/// </summary>
internal sealed class TileKernel : IDisposable
{
    // One plane in half of a 512-KiB second-level cache: the transform works on one at a time.
    private const int PlaneBytes = 256 * 1024;

    private readonly IPatternBasis _basis;
    private readonly FrameWeightTable _weights;
    private readonly NativeBuffer<float>[] _planes;

    public TileKernel(IPatternBasis basis, FrameWeightTable weights, int? lanes)
    {
        _basis = basis;
        _weights = weights;
        Lanes = RoundUp(lanes ?? Math.Clamp(PlaneBytes / sizeof(float) / basis.PatternCount, 1, 64));
        _planes = [.. Enumerable.Range(0, 4).Select(_ => new NativeBuffer<float>((long)basis.PatternCount * Lanes))];
    }

    /// <summary>The fewest lanes that fill registers.</summary>
    public static int SmallestLanes => ModePlanes.LaneMultiple;

    /// <summary>Pixels taken together.</summary>
    public int Lanes { get; }

    /// <summary>A number of pixels rounded up to fill registers.</summary>
    public static int RoundUp(int pixels) =>
        (pixels + ModePlanes.LaneMultiple - 1) / ModePlanes.LaneMultiple * ModePlanes.LaneMultiple;

    /// <summary>Reconstructs the rows of a tile.</summary>
    /// <param name="counts">Counts (frame, pixel); <paramref name="stride"/> pixels a frame, a multiple of <see cref="Lanes"/>.</param>
    /// <param name="stride">Pixels from one frame to the next.</param>
    /// <param name="pixels">Pixels in the tile.</param>
    /// <param name="dark">Dark level of each pixel, counts, <paramref name="stride"/> long and a register more.</param>
    /// <param name="rowScale">One factor a pixel, <paramref name="stride"/> long.</param>
    /// <param name="rows">Takes pixels · modes numbers.</param>
    public void Run(ReadOnlySpan<ushort> counts, int stride, int pixels, ReadOnlySpan<float> dark, ReadOnlySpan<float> rowScale, Span<Complex64> rows)
    {
        for (int first = 0; first < pixels; first += Lanes)
        {
            ModePlanes planes = Planes(_basis.PatternCount);
            Demodulate(counts[first..], stride, dark.Slice(first, Lanes), planes);
            _basis.Invert(planes);
            int count = Math.Min(Lanes, pixels - first);
            Span<Complex64> target = rows.Slice(first * _basis.ModeCount, count * _basis.ModeCount);
            InterleaveRows.Run(Planes(_basis.ModeCount), count, rowScale.Slice(first, Lanes), target);
        }
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        foreach (NativeBuffer<float> plane in _planes)
        {
            plane.Dispose();
        }
    }

    private ModePlanes Planes(int rows)
    {
        int size = rows * Lanes;
        return new ModePlanes(
            rows, Lanes, _planes[0].Slice(0, size), _planes[1].Slice(0, size), _planes[2].Slice(0, size), _planes[3].Slice(0, size));
    }

    private void Demodulate(ReadOnlySpan<ushort> counts, int stride, ReadOnlySpan<float> dark, in ModePlanes planes)
    {
        for (int k = 0; k < planes.Rows; k++)
        {
            int row = _basis.PlaneRow(k);
            WeightedFrameSum.Run(
                counts, stride, _weights.Frames(k), _weights.Weights(k), planes.RealRow(row), planes.ImaginaryRow(row));
            if (_weights.DarkWeight[k] != default)
            {
                SubtractScaled.Run(planes.RealRow(row), dark, _weights.DarkWeight[k].r);
                SubtractScaled.Run(planes.ImaginaryRow(row), dark, _weights.DarkWeight[k].i);
            }
        }
    }
}
