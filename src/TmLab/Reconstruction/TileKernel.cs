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
    // A plane of this size still transforms at the speed of the second-level cache's neighbour, and longer runs of each frame make up
    // for it: measured, 128 lanes of a thousand modes are the fastest.
    private const int PlaneBytes = 512 * 1024;
    private const int MostLanes = 128;

    private readonly IPatternBasis _basis;
    private readonly FrameWeightTable _weights;
    private readonly NativeBuffer<float>[] _planes;

    public TileKernel(IPatternBasis basis, FrameWeightTable weights, int? lanes)
    {
        _basis = basis;
        _weights = weights;
        Lanes = RoundUp(lanes ?? Math.Clamp(PlaneBytes / sizeof(float) / basis.PatternCount, 1, MostLanes));
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
        WeightedFrameSum.RunAll(counts, stride, _weights.Weights, planes);
        for (int row = 0; row < planes.Rows; row++)
        {
            Complex64 weight = _weights.DarkWeight[row];
            if (weight != default)
            {
                SubtractScaled.Run(planes.RealRow(row), dark, weight.r);
                SubtractScaled.Run(planes.ImaginaryRow(row), dark, weight.i);
            }
        }
    }
}
