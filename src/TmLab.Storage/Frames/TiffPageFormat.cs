namespace TmLab.Storage.Frames;

/// <summary>The tags of a TIFF page that decide whether and how its counts can be read (TIFF 6.0, Adobe 1992).</summary>
/// <param name="Width">Tag 256.</param>
/// <param name="Height">Tag 257.</param>
/// <param name="Bits">Tag 258, bits a sample.</param>
/// <param name="Samples">Tag 277, samples a pixel.</param>
/// <param name="Compression">Tag 259.</param>
/// <param name="Photometric">Tag 262: 0 white is zero, 1 black is zero.</param>
/// <param name="SampleFormat">Tag 339: 1 unsigned, 2 signed, 3 floating point, 4 undefined.</param>
internal readonly record struct TiffPageFormat(
    long Width, long Height, long Bits, long Samples, long Compression, long Photometric, long SampleFormat)
{
    /// <summary>No compression.</summary>
    public const long Uncompressed = 1;

    private static readonly long[] LosslessCompressions = [Uncompressed, 5, 8, 32946, 32773];

    /// <summary>What stands against reading the page as counts; null when nothing does.</summary>
    public (string Found, string Remedy)? Objection() => this switch
    {
        { Samples: not 1 } => ($"a pixel has {Samples} samples", "save grey frames, one sample a pixel"),
        { Photometric: 0 } => ("white is stored as zero", "save with black as zero"),
        { Photometric: not 1 } => ($"the pixels are not grey levels (photometric interpretation {Photometric})", "save grey frames"),
        { SampleFormat: 2 } => ("the samples are signed", "save unsigned integers"),
        { SampleFormat: 3 } => ("the samples are floating-point numbers", "save the camera's counts as unsigned integers"),
        { SampleFormat: not (1 or 4) } => ($"the sample format is {SampleFormat}", "save unsigned integers"),
        { Bits: not (8 or 12 or 16) } => ($"a sample has {Bits} bits", "save 8, 12 or 16 bits"),
        _ when !LosslessCompressions.Contains(Compression) => ($"the compression scheme is {Compression}", "save uncompressed, LZW or deflate (none of which loses counts)"),
        _ => null,
    };
}
