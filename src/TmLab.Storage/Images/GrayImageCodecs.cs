using SixLabors.ImageSharp;
using SixLabors.ImageSharp.Formats.Bmp;
using SixLabors.ImageSharp.Formats.Png;

namespace TmLab.Storage.Images;

/// <summary>
/// The image library restricted to what is needed: PNG and BMP modules only, metadata ignored. Its TIFF codecs and its reader of
/// colour profiles have known flaws that are mended only in versions under a paid licence.
/// </summary>
internal static class GrayImageCodecs
{
    /// <summary>The largest image that is decoded, pixels.</summary>
    public const long MostPixels = 1L << 28;

    /// <summary>The configuration with PNG and BMP alone.</summary>
    public static Configuration Configuration { get; } = new(new PngConfigurationModule(), new BmpConfigurationModule());

    /// <summary>A PNG decoder that skips metadata.</summary>
    public static PngDecoder PngDecoder { get; } = new() { IgnoreMetadata = true };
}
