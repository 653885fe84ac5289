using TmLab.Quantities;

namespace TmLab.Measurement;

/// <summary>Frames as the bench delivered them, read once from front to back.</summary>
public interface IFrameSource : IDisposable
{
    /// <summary>Number of frames.</summary>
    int FrameCount { get; }

    /// <summary>Size of every frame.</summary>
    ImageSize FrameSize { get; }

    /// <summary>The name of the file that the next frame comes from and its place there, for messages.</summary>
    (string File, string Place) NextFrame { get; }

    /// <summary>Reads the next frame, row-major.</summary>
    /// <exception cref="Failures.BadInputException">The frame is cut short, damaged or of another size.</exception>
    /// <exception cref="InvalidOperationException">There is no further frame.</exception>
    void ReadNext(Span<ushort> destination);
}
