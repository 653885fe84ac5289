namespace TmLab.Simulation;

/// <summary>The form of the reference field on the camera.</summary>
public enum ReferenceShape
{
    /// <summary>A plane wave of equal strength everywhere.</summary>
    Plane,

    /// <summary>A fully developed speckle field of the same grain as the signal: many pixels have little reference.</summary>
    Speckle,
}

/// <summary>The reference beam.</summary>
/// <param name="Shape">Plane or speckle.</param>
/// <param name="IntensityRatio">Mean intensity over that of the signal with all macro-pixels on, &gt; 0.</param>
/// <param name="TiltXRadPerPixel">Phase slope of the plane wave along x, radians a pixel.</param>
/// <param name="TiltYRadPerPixel">Phase slope of the plane wave along y, radians a pixel.</param>
public sealed record ReferenceBeam(
    ReferenceShape Shape = ReferenceShape.Plane, double IntensityRatio = 4, double TiltXRadPerPixel = 0, double TiltYRadPerPixel = 0);
