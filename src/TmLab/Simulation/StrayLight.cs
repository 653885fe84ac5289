using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>Constant incoherent light on part of the camera, in every frame but the dark ones; enough of it saturates the region.</summary>
/// <param name="Region">The pixels.</param>
/// <param name="Electrons">Photoelectrons a pixel a frame at the starting power.</param>
public sealed record StrayLight(PixelRectangle Region, double Electrons);
