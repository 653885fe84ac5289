using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;

namespace TmLab.Shaping;

/// <summary>From one grey level a macro-pixel to the image that the panel shows.</summary>
public static class PanelDrawing
{
    /// <summary>
    /// Draws macro-pixels on a panel: the region is divided into the grid's cells as evenly as whole pixels allow, each cell filled
    /// with its macro-pixel's level; outside the region grey is 0. A flatness image is added modulo 256, over the whole panel.
    /// </summary>
    /// <param name="panel">The panel.</param>
    /// <param name="grid">The grid.</param>
    /// <param name="levels">One grey level a macro-pixel, row-major over the grid.</param>
    /// <param name="flatness">Native size, or empty.</param>
    public static ModulatorImage Draw(
        ModulatorDescription panel, GridShape grid, ImmutableArray<byte> levels, ImmutableArray<byte> flatness)
    {
        Preconditions.SameLength(levels.Length, grid.Count);
        Preconditions.Require(panel.Region.FitsIn(panel.Size), "The region must lie within the panel.");
        var image = new byte[panel.Size.PixelCount];
        for (int y = 0; y < panel.Region.Height; y++)
        {
            int row = (int)((long)y * grid.Rows / panel.Region.Height);
            for (int x = 0; x < panel.Region.Width; x++)
            {
                int column = (int)((long)x * grid.Columns / panel.Region.Width);
                image[((panel.Region.Y + y) * panel.Size.Width) + panel.Region.X + x] = levels[(row * grid.Columns) + column];
            }
        }

        for (int i = 0; i < flatness.Length; i++)
        {
            image[i] += flatness[i];
        }

        return new ModulatorImage(panel.Size, [.. image]);
    }
}
