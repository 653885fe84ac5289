namespace TmLab.Simulation;

/// <summary>The outline of the pupil that limits the light on its way to the camera.</summary>
public enum PupilShape
{
    /// <summary>A disc: |μ|² = |2 J1(x)/x|², x = π D Δr / (λ z).</summary>
    Circular,

    /// <summary>A square, sides along the camera's: |μ|² = sinc².</summary>
    Square,
}

/// <summary>
/// How large a speckle grain is on the camera. The pupil of diameter (or side) D gives intensity correlations whose full width at
/// half maximum is 1.029 λz/D (disc) or 0.886 λz/D (square); Goodman, J. Opt. Soc. Am. 66, 1145 (1976).
/// </summary>
/// <param name="WidthPixels">Full width at half maximum of the intensity correlation, camera pixels; 0 for independent pixels.</param>
/// <param name="Shape">The pupil's outline.</param>
public sealed record SpeckleGrain(double WidthPixels, PupilShape Shape = PupilShape.Circular)
{
    private const double DiscWidth = 1.0290;
    private const double SquareWidth = 0.8859;

    /// <summary>Every camera pixel sees an independent speckle.</summary>
    public static SpeckleGrain IndependentPixels { get; } = new(0);

    /// <summary>D/(λz), cycles a pixel: the width of the band of spatial frequencies of the field; infinite for independent pixels.</summary>
    public double PupilCyclesPerPixel => (Shape == PupilShape.Circular ? DiscWidth : SquareWidth) / WidthPixels;
}
