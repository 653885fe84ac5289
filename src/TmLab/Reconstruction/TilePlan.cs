using TmLab.Numerics;

namespace TmLab.Reconstruction;

/// <summary>How the pixels are divided into tiles: as large as memory budget and <see cref="ReconstructionSettings.LargestTileBytes"/> allow. Immutable.</summary>
/// <param name="TilePixels">Pixels a tile.</param>
/// <param name="TileCount">Number of tiles.</param>
/// <param name="TileBytes">Bytes of one tile's counts and rows.</param>
/// <param name="Threads">How many tiles are held at a time.</param>
public sealed record TilePlan(int TilePixels, int TileCount, long TileBytes, int Threads)
{
    /// <summary>Plans.</summary>
    /// <param name="frames">Number of frames.</param>
    /// <param name="modes">Number of modes.</param>
    /// <param name="pixels">Number of pixels, at least 1.</param>
    /// <param name="settings">Memory, threads, largest tile.</param>
    public static TilePlan For(int frames, int modes, int pixels, ReconstructionSettings settings)
    {
        Preconditions.InRange(pixels, 1, int.MaxValue);
        Preconditions.InRange(settings.Threads, 1, int.MaxValue);
        int smallest = TileKernel.SmallestLanes;
        long bytesPerPixel = (2L * frames) + (8L * modes);
        long budget = Math.Min(settings.MemoryBytes / settings.Threads, settings.LargestTileBytes);
        int tile = (int)Math.Clamp(budget / bytesPerPixel / smallest * smallest, Math.Min(smallest, pixels), pixels);
        return new TilePlan(tile, (pixels + tile - 1) / tile, tile * bytesPerPixel, settings.Threads);
    }
}
