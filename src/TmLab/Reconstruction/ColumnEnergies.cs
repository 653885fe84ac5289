using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Matrices;

namespace TmLab.Reconstruction;

/// <summary>
/// The columns' energies over a few runs of rows. Light that reaches the camera whatever the modulator shows comes out as one column
/// (the first, for Hadamard and Fourier patterns) far above the others.
/// </summary>
internal static class ColumnEnergies
{
    private const int Runs = 16;
    private const int RunPixels = 16;

    // Columns of a scattering medium differ by ±1/√(independent pixels); a smooth illumination of the panel by a factor of two or so.
    private const double OutlyingRatio = 5;
    private const int FewestModes = 8;

    /// <summary>The columns with more than five times the median energy, rising.</summary>
    public static ImmutableArray<int> Outlying(
        IFrameBlockReader reader, IPatternBasis basis, FrameWeightTable weights, float[] dark, PixelJudgement pixels)
    {
        double[] energy = Of(reader, basis, weights, dark, pixels);
        double[] sorted = [.. energy.Order()];
        double limit = OutlyingRatio * sorted[sorted.Length / 2];
        return basis.ModeCount < FewestModes ? [] : [.. Enumerable.Range(0, energy.Length).Where(n => energy[n] > limit && limit > 0)];
    }

    private static double[] Of(IFrameBlockReader reader, IPatternBasis basis, FrameWeightTable weights, float[] dark, PixelJudgement pixels)
    {
        using var kernel = new TileKernel(basis, weights, TileKernel.SmallestLanes);
        int frames = reader.FrameCount, all = reader.FrameSize.PixelCount, run = Math.Min(RunPixels, all);
        using var counts = new NativeBuffer<ushort>(((long)frames * run) + kernel.Lanes);
        using var rows = new NativeBuffer<Complex64>((long)run * basis.ModeCount);
        float[] level = new float[run + kernel.Lanes], scale = new float[run + kernel.Lanes];
        var energy = new double[basis.ModeCount];
        for (int r = 0; r < Math.Min(Runs, all / run); r++)
        {
            int first = (int)((long)r * (all - run) / Math.Max(1, Runs - 1));
            reader.Read(0, frames, first, run, counts.Slice(0, frames * run));
            dark.AsSpan(first, run).CopyTo(level);
            pixels.RowScale.AsSpan(first, run).CopyTo(scale);
            Span<Complex64> tile = rows.Slice(0, run * basis.ModeCount);
            kernel.Run(counts.Slice(0, (frames * run) + kernel.Lanes), run, run, level, scale, tile);
            for (int i = 0; i < tile.Length; i++)
            {
                energy[i % basis.ModeCount] += pixels.Valid[first + (i / basis.ModeCount)] ? tile[i].SquaredMagnitude : 0;
            }
        }

        return energy;
    }
}
