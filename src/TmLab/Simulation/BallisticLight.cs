using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>
/// Light that passes unscattered: each macro-pixel's wave reaches the camera by free-space Fresnel propagation at the Fresnel
/// number of the grid, T[p, n] = exp(iπ Σ_axis N_axis (ξ_p − ξ_n)²) with ξ the relative position in [0, 1]. Its magnitude is the
/// same everywhere, and macro-pixels stay distinguishable.
/// </summary>
internal static class BallisticLight
{
    /// <summary>The unit-modulus matrix, one row a macro-pixel, one column a camera pixel.</summary>
    public static FieldPlanes Draw(GridShape grid, ImageSize camera)
    {
        var planes = new FieldPlanes(grid.Count, camera.PixelCount);
        for (int mode = 0; mode < grid.Count; mode++)
        {
            for (int pixel = 0; pixel < camera.PixelCount; pixel++)
            {
                (double sin, double cos) = PortableMath.SinCosTurns(PathTurns(grid, camera, mode, pixel));
                (planes.Real(mode)[pixel], planes.Imaginary(mode)[pixel]) = ((float)cos, (float)sin);
            }
        }

        return planes;
    }

    private static double PathTurns(GridShape grid, ImageSize camera, int mode, int pixel)
    {
        (int row, int column) = Math.DivRem(mode, grid.Columns);
        (int y, int x) = Math.DivRem(pixel, camera.Width);
        double dy = ((y + 0.5) / camera.Height) - ((row + 0.5) / grid.Rows);
        double dx = ((x + 0.5) / camera.Width) - ((column + 0.5) / grid.Columns);
        return ((grid.Rows * dy * dy) + (grid.Columns * dx * dx)) / 2;
    }
}
