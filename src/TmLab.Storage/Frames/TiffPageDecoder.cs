using System.Globalization;
using System.Runtime.InteropServices;
using BitMiracle.LibTiff.Classic;
using TmLab.Failures;
using TmLab.Quantities;

namespace TmLab.Storage.Frames;

/// <summary>Decodes the pages of one TIFF file with the TIFF library, which is told where each directory stands.</summary>
internal sealed class TiffPageDecoder : IDisposable
{
    private readonly Tiff _tiff;
    private readonly TiffLog _log = new();
    private readonly string _name;
    private readonly TiffStructure _structure;
    private byte[] _bytes = [];

    static TiffPageDecoder()
    {
        // The library knows one handler a process. Ours keeps nothing itself: it passes each message to the log of the file it is about.
        Tiff.SetErrorHandler(new TiffLogRouter());
    }

    public TiffPageDecoder(Stream stream, string name, TiffStructure structure)
    {
        _name = name;
        _structure = structure;
        stream.Position = 0;
        try
        {
            _tiff = Tiff.ClientOpen(name, "r", _log, new TiffFileStream(stream)) ?? throw Damaged(0, null);
        }
        catch (Exception failure) when (IsFromDamage(failure))
        {
            throw Damaged(0, failure);
        }
    }

    /// <summary>Decodes a page into row-major counts.</summary>
    public void Read(int page, Span<ushort> destination)
    {
        _log.Clear();
        try
        {
            if (!_tiff.SetSubDirectory(_structure.Pages[page]))
            {
                throw Damaged(page, null);
            }

            if (_tiff.IsTiled())
            {
                ReadTiles(page, destination);
            }
            else
            {
                ReadStrips(page, destination);
            }
        }
        catch (Exception failure) when (IsFromDamage(failure))
        {
            throw Damaged(page, failure);
        }
    }

    public void Dispose() => _tiff.Dispose();

    /// <summary>Whether an exception of the library comes from a damaged file: it does not check all that a file may claim.</summary>
    private static bool IsFromDamage(Exception failure) => failure is IOException or IndexOutOfRangeException or ArgumentException
        or NullReferenceException or InvalidCastException or OverflowException or DivideByZeroException or OutOfMemoryException or FormatException;

    private int Bits => (int)_structure.Format.Bits;

    private ImageSize Size => _structure.FrameSize;

    private static int RowBytes(int pixels, int bits) => checked(((pixels * bits) + 7) / 8);

    private void ReadStrips(int page, Span<ushort> destination)
    {
        int rowBytes = RowBytes(Size.Width, Bits);
        int stripRows = StripRows();
        Reserve(page, (long)stripRows * rowBytes);
        for (int y = 0, strip = 0; y < Size.Height; y += stripRows, strip++)
        {
            int rows = Math.Min(stripRows, Size.Height - y);
            if (_tiff.ReadEncodedStrip(strip, _bytes, 0, rows * rowBytes) != rows * rowBytes)
            {
                throw Damaged(page, null);
            }

            Span<ushort> target = destination.Slice(y * Size.Width, rows * Size.Width);
            for (int row = 0; row < (Bits == 12 ? rows : 1); row++)
            {
                Unpack(_bytes.AsSpan(row * rowBytes), Bits == 12 ? target.Slice(row * Size.Width, Size.Width) : target);
            }
        }
    }

    private int StripRows()
    {
        FieldValue[]? field = _tiff.GetField(TiffTag.ROWSPERSTRIP);
        int rows = field is null ? Size.Height : field[0].ToInt();
        return rows is < 1 || rows > Size.Height ? Size.Height : rows;
    }

    private void ReadTiles(int page, Span<ushort> destination)
    {
        int tileWidth = _tiff.GetField(TiffTag.TILEWIDTH)?[0].ToInt() ?? 0;
        int tileHeight = _tiff.GetField(TiffTag.TILELENGTH)?[0].ToInt() ?? 0;
        FrameSource.CheckedSize(tileWidth, tileHeight, _name, $"page {page}");
        int tileRowBytes = RowBytes(tileWidth, Bits);
        Reserve(page, (long)tileRowBytes * tileHeight);
        int tile = 0;
        for (int y = 0; y < Size.Height; y += tileHeight)
        {
            for (int x = 0; x < Size.Width; x += tileWidth, tile++)
            {
                if (_tiff.ReadEncodedTile(tile, _bytes, 0, tileRowBytes * tileHeight) != tileRowBytes * tileHeight)
                {
                    throw Damaged(page, null);
                }

                CopyTile(x, y, Math.Min(tileWidth, Size.Width - x), Math.Min(tileHeight, Size.Height - y), tileRowBytes, destination);
            }
        }
    }

    private void CopyTile(int x, int y, int width, int height, int tileRowBytes, Span<ushort> destination)
    {
        for (int row = 0; row < height; row++)
        {
            Unpack(_bytes.AsSpan(row * tileRowBytes), destination.Slice(((y + row) * Size.Width) + x, width));
        }
    }

    /// <summary>Takes memory once, after a check that so few compressed bytes can hold so much.</summary>
    private void Reserve(int page, long bytes)
    {
        // LZW codes of 12 bits stand for at most 3,837 bytes, deflate reaches 1,032 : 1.
        const long MostExpansion = 2600;
        if (bytes > FrameSource.MostFramePixels * 2 || bytes / MostExpansion > _tiff.GetStream().Size(_log))
        {
            throw new BadInputException(_name, $"page {page}", $"the page claims blocks of {bytes} bytes, more than the file can hold", "check that the file is undamaged");
        }

        if (_bytes.Length < bytes)
        {
            _bytes = new byte[bytes];
        }
    }

    private void Unpack(ReadOnlySpan<byte> source, Span<ushort> destination)
    {
        switch (Bits)
        {
            case 8:
                RawPixels.Widen(source[..destination.Length], destination);
                break;
            case 12:
                Unpack12(source, destination);
                break;
            default:
                // The library has turned the bytes into this computer's order.
                MemoryMarshal.Cast<byte, ushort>(source)[..destination.Length].CopyTo(destination);
                break;
        }
    }

    /// <summary>Two 12-bit numbers in three bytes, most significant bit first.</summary>
    private static void Unpack12(ReadOnlySpan<byte> source, Span<ushort> destination)
    {
        for (int i = 0; i < destination.Length; i++)
        {
            int at = i / 2 * 3;
            destination[i] = (ushort)((i & 1) == 0
                ? (source[at] << 4) | (source[at + 1] >> 4)
                : ((source[at + 1] & 0x0F) << 8) | source[at + 2]);
        }
    }

    private BadInputException Damaged(int page, Exception? failure) => new(
        _name, $"page {page} of {_structure.Pages.Count}", $"the page cannot be decoded{_log.Detail}: the file is damaged or cut short",
        "copy it again from the bench", failure);

    /// <summary>What the library said about one file.</summary>
    private sealed class TiffLog
    {
        public string? First { get; private set; }

        public string Detail => First is null ? "" : $" ({First})";

        public void Clear() => First = null;

        public void Add(string method, string format, object[] args)
        {
            // The library's formats are its own; a file's content may stand in the arguments only.
            First ??= $"{method}: {string.Format(CultureInfo.InvariantCulture, format, args)}".TrimEnd('.');
        }
    }

    private sealed class TiffLogRouter : TiffErrorHandler
    {
        public override void ErrorHandler(Tiff tif, string method, string format, params object[] args)
        {
            // Comes without the file's own data; the extended form below follows each call.
        }

        public override void ErrorHandlerExt(Tiff tif, object clientData, string method, string format, params object[] args) =>
            (clientData as TiffLog)?.Add(method, format, args);

        public override void WarningHandler(Tiff tif, string method, string format, params object[] args)
        {
            // Unknown tags and the like: nothing to do with counts.
        }

        public override void WarningHandlerExt(Tiff tif, object clientData, string method, string format, params object[] args)
        {
            // See above.
        }
    }

    private sealed class TiffFileStream(Stream stream) : TiffStream
    {
        public override int Read(object clientData, byte[] buffer, int offset, int count) =>
            stream.ReadAtLeast(buffer.AsSpan(offset, count), count, throwOnEndOfStream: false);

        public override long Seek(object clientData, long offset, SeekOrigin origin) => stream.Seek(offset, origin);

        public override void Close(object clientData)
        {
            // The frame source owns the file.
        }

        public override long Size(object clientData) => stream.Length;
    }
}
