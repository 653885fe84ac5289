using TmLab.Quantities;

namespace TmLab.Shaping;

/// <summary>A camera pixel to be lit, and its share of the light.</summary>
/// <param name="Pixel">The pixel.</param>
/// <param name="Weight">Relative amplitude wanted there, positive.</param>
public readonly record struct FocusTarget(CameraPixel Pixel, double Weight = 1);
