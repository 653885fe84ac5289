using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Storage.Frames;

/// <summary>Opens the source of frames that a manifest names. A new kind of storage is one new file and one line here.</summary>
public static class FrameSource
{
    /// <summary>The largest frame that is read, pixels: sizes come from files and are checked before memory is taken.</summary>
    public const long MostFramePixels = 1L << 28;

    /// <summary>Opens a source; sizes and counts are known then, no frame has been decoded.</summary>
    /// <param name="frames">What the manifest says of the frames.</param>
    /// <param name="camera">What the manifest says of the camera (raw frames need its size).</param>
    /// <param name="fullPaths">Where the files of <paramref name="frames"/> are, in the same order; for images one pattern.</param>
    /// <exception cref="BadInputException">A file is missing, damaged, cut short or not of the kind.</exception>
    public static IFrameSource Open(FrameLocation frames, CameraDescription camera, IReadOnlyList<string> fullPaths) => frames.Kind switch
    {
        FrameStorageKind.Tiff => new TiffFrameSource(fullPaths, frames.Paths),
        FrameStorageKind.Images => new ImageFrameSource(fullPaths[0], frames.Paths[0]),
        FrameStorageKind.Raw => new RawFrameSource(fullPaths[0], frames.Paths[0], camera.Size!.Value, frames.Pixel!.Value, frames.HeaderBytes),
        _ => new Hdf5FrameSource(fullPaths[0], frames.Paths[0], frames.Dataset!),
    };

    /// <summary>Refuses sizes that no camera has, before memory is taken for them.</summary>
    internal static ImageSize CheckedSize(long width, long height, string file, string place) =>
        width is < 1 or > int.MaxValue || height is < 1 or > int.MaxValue || width > MostFramePixels / height
            ? throw new BadInputException(file, place, $"the file claims frames of {width} × {height} pixels", "check that the file is undamaged")
            : new ImageSize((int)width, (int)height);

    /// <summary>Refuses to read past the last frame.</summary>
    internal static void RequireNext(int next, int count)
    {
        if (next >= count)
        {
            throw new InvalidOperationException($"All {count} frames have been read.");
        }
    }
}
