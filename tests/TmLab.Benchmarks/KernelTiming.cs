using System.Diagnostics;
using System.Globalization;
using System.Text.Json;
using TmLab.Quantities;
using TmLab.Reconstruction;

namespace TmLab.Benchmarks;

/// <summary>
/// Seconds of demodulation and inverse basis alone, from counts in memory to matrix rows in memory, on all cores, through the very
/// tiles that the program uses: what a tile copies from the frames and to the matrix is in the time, disk and checksums are not.
/// </summary>
internal static class KernelTiming
{
    private const int WarmUpRounds = 3;

    /// <summary>The size of the measurement.</summary>
    /// <param name="Modes">Hadamard modes.</param>
    /// <param name="Side">The camera region is Side × Side pixels.</param>
    /// <param name="Steps">Phase steps.</param>
    /// <param name="Rounds">Rounds that are timed, after the warm-up.</param>
    internal sealed record Options(int Modes = 1024, int Side = 256, int Steps = 4, int Rounds = 5)
    {
        public static Options Parse(IReadOnlyList<string> words)
        {
            var options = new Options();
            for (int at = 0; at < words.Count; at += 2)
            {
                int value = int.Parse(words[at + 1], CultureInfo.InvariantCulture);
                options = words[at] switch
                {
                    "--modes" => options with { Modes = value },
                    "--side" => options with { Side = value },
                    "--steps" => options with { Steps = value },
                    "--rounds" => options with { Rounds = value },
                    _ => throw new ArgumentException($"{words[at]} is none of --modes, --side, --steps, --rounds.", nameof(words)),
                };
            }

            return options;
        }
    }

    /// <summary>What was measured.</summary>
    /// <param name="Kernel">Median over the rounds, seconds.</param>
    /// <param name="Fastest">The fastest round, seconds.</param>
    /// <param name="TilePixels">Pixels a tile.</param>
    internal sealed record Result(double Kernel, double Fastest, int TilePixels)
    {
        public string ToJson() => JsonSerializer.Serialize(new { kernel = Kernel, fastest = Fastest, tile_pixels = TilePixels });
    }

    public static Result Measure(Options options)
    {
        var kernelCase = new KernelCase(options.Modes, options.Steps);
        var size = new ImageSize(options.Side, options.Side);
        using var frames = new CountsInMemory(kernelCase.FrameCount, size);
        using var rows = new RowsInMemory(size.PixelCount, options.Modes);
        float[] dark = new float[size.PixelCount];
        float[] scale = [.. Enumerable.Repeat(1f, size.PixelCount)];
        var tiles = new TiledRows(frames, kernelCase.Basis, kernelCase.Weights, dark, scale, new ReconstructionSettings());
        double[] seconds = [.. Enumerable.Range(0, WarmUpRounds + options.Rounds).Select(_ => Time(tiles, rows)).Skip(WarmUpRounds).Order()];
        return new Result(seconds[seconds.Length / 2], seconds[0], tiles.Plan.TilePixels);
    }

    private static double Time(TiledRows tiles, RowsInMemory rows)
    {
        long start = Stopwatch.GetTimestamp();
        tiles.Run(rows, progress: null, CancellationToken.None);
        return Stopwatch.GetElapsedTime(start).TotalSeconds;
    }
}
