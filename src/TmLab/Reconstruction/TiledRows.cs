using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.Reconstruction;

/// <summary>
/// Runs the kernel over tiles of pixels on several threads. Each thread reads its tile of all frames, computes and writes, so
/// that one thread's reading and writing overlaps with another's computing. Rows are independent: neither tile size nor number
/// of threads changes a bit of the result.
/// </summary>
internal sealed class TiledRows
{
    private readonly IFrameBlockReader _reader;
    private readonly IPatternBasis _basis;
    private readonly FrameWeightTable _weights;
    private readonly float[] _dark;
    private readonly float[] _rowScale;
    private readonly ReconstructionSettings _settings;
    private readonly int _pixels;

    public TiledRows(
        IFrameBlockReader reader, IPatternBasis basis, FrameWeightTable weights, float[] dark, float[] rowScale, ReconstructionSettings settings)
    {
        _reader = reader;
        _basis = basis;
        _weights = weights;
        _dark = dark;
        _rowScale = rowScale;
        _settings = settings;
        _pixels = reader.FrameSize.PixelCount;
    }

    /// <summary>How the pixels are divided.</summary>
    public TilePlan Plan => TilePlan.For(_reader.FrameCount, _basis.ModeCount, _pixels, _settings);

    /// <summary>Writes all rows and returns Σ_n |T[p, n]|² of each.</summary>
    public double[] Run(IRowBlockWriter rows, IProgress<StageProgress>? progress, CancellationToken cancel)
    {
        TilePlan plan = Plan;
        int tilePixels = plan.TilePixels;
        var energy = new double[_pixels];
        long done = 0;
        var options = new ParallelOptions { MaxDegreeOfParallelism = plan.Threads, CancellationToken = cancel };
        Parallel.For(
            0,
            plan.TileCount,
            options,
            () => new Workspace(this, tilePixels),
            (tile, _, workspace) =>
            {
                int first = tile * tilePixels;
                int count = Math.Min(tilePixels, _pixels - first);
                workspace.Process(first, count, rows, energy);
                progress?.Report(new StageProgress("reconstructing", Interlocked.Add(ref done, count), _pixels, "pixels"));
                return workspace;
            },
            workspace => workspace.Dispose());
        return energy;
    }

    private sealed class Workspace : IDisposable
    {
        private readonly TiledRows _owner;
        private readonly TileKernel _kernel;
        private readonly NativeBuffer<ushort> _counts;
        private readonly NativeBuffer<Complex64> _rows;
        private readonly float[] _dark;
        private readonly float[] _scale;

        public Workspace(TiledRows owner, int tilePixels)
        {
            _owner = owner;
            _kernel = new TileKernel(owner._basis, owner._weights, owner._settings.Lanes);
            // The kernel reads whole registers: behind the last frame's last pixel stand lanes that nobody looks at.
            _counts = new NativeBuffer<ushort>(((long)owner._reader.FrameCount * tilePixels) + _kernel.Lanes);
            _rows = new NativeBuffer<Complex64>((long)tilePixels * owner._basis.ModeCount);
            _dark = new float[tilePixels + _kernel.Lanes];
            _scale = new float[tilePixels + _kernel.Lanes];
        }

        public void Process(int first, int count, IRowBlockWriter rows, double[] energy)
        {
            int frames = _owner._reader.FrameCount;
            _owner._reader.Read(0, frames, first, count, _counts.Slice(0, frames * count));
            _owner._dark.AsSpan(first, count).CopyTo(_dark);
            _owner._rowScale.AsSpan(first, count).CopyTo(_scale);
            Span<Complex64> tile = _rows.Slice(0, count * _owner._basis.ModeCount);
            _kernel.Run(_counts.Slice(0, (frames * count) + _kernel.Lanes), count, count, _dark, _scale, tile);
            rows.WriteRows(first, tile);
            for (int p = 0; p < count; p++)
            {
                energy[first + p] = Energy(tile.Slice(p * _owner._basis.ModeCount, _owner._basis.ModeCount));
            }
        }

        public void Dispose()
        {
            _kernel.Dispose();
            _counts.Dispose();
            _rows.Dispose();
        }

        private static double Energy(ReadOnlySpan<Complex64> row)
        {
            ReadOnlySpan<float> parts = System.Runtime.InteropServices.MemoryMarshal.Cast<Complex64, float>(row);
            return SquaredNorm.Of(parts);
        }
    }
}
