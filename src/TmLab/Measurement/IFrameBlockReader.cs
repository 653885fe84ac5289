using TmLab.Quantities;

namespace TmLab.Measurement;

/// <summary>
/// The narrow door through which the science sees counts: any block of frames over any run of pixels. Implementations allow
/// several threads to read at once.
/// </summary>
public interface IFrameBlockReader : IDisposable
{
    /// <summary>Number of frames.</summary>
    int FrameCount { get; }

    /// <summary>Size of every frame.</summary>
    ImageSize FrameSize { get; }

    /// <summary>
    /// Reads frames firstFrame … firstFrame+frameCount−1 over pixels firstPixel … firstPixel+pixelCount−1 (row-major numbering of the
    /// frame) into <paramref name="destination"/>, shape (frame, pixel), without padding.
    /// </summary>
    /// <exception cref="ArgumentException">The block leaves the data or the destination is too short.</exception>
    /// <exception cref="Failures.BadInputException">The file is damaged or changed.</exception>
    void Read(int firstFrame, int frameCount, int firstPixel, int pixelCount, Span<ushort> destination);
}
