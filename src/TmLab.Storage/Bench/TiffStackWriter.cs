using System.Globalization;
using System.Runtime.InteropServices;
using BitMiracle.LibTiff.Classic;
using TmLab.Failures;
using TmLab.Quantities;

namespace TmLab.Storage.Bench;

/// <summary>Writes frames as the pages of one uncompressed 16-bit grey TIFF file (TIFF revision 6.0).</summary>
internal sealed class TiffStackWriter : IFrameSink
{
    private readonly Tiff _tiff;
    private readonly string _path;
    private readonly ImageSize _size;
    private readonly byte[] _strip;

    public TiffStackWriter(string path, ImageSize size)
    {
        _path = path;
        _size = size;
        _strip = new byte[2 * size.PixelCount];
        _tiff = Tiff.Open(path, "wl") ?? throw Failed();
    }

    public void Write(ReadOnlySpan<ushort> counts)
    {
        _tiff.SetField(TiffTag.IMAGEWIDTH, _size.Width);
        _tiff.SetField(TiffTag.IMAGELENGTH, _size.Height);
        _tiff.SetField(TiffTag.BITSPERSAMPLE, 16);
        _tiff.SetField(TiffTag.SAMPLESPERPIXEL, 1);
        _tiff.SetField(TiffTag.ROWSPERSTRIP, _size.Height);
        _tiff.SetField(TiffTag.COMPRESSION, Compression.NONE);
        _tiff.SetField(TiffTag.PHOTOMETRIC, Photometric.MINISBLACK);
        _tiff.SetField(TiffTag.PLANARCONFIG, PlanarConfig.CONTIG);
        MemoryMarshal.AsBytes(counts).CopyTo(_strip);
        if (_tiff.WriteEncodedStrip(0, _strip, _strip.Length) < 0 || !_tiff.WriteDirectory())
        {
            throw Failed();
        }
    }

    public void Dispose() => _tiff.Dispose();

    private OutputException Failed() =>
        new(Path.GetFileName(_path), OutputFailure.NotWritable, string.Create(CultureInfo.InvariantCulture, $"choose another folder or raw frames"));
}
