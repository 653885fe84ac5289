using System.Buffers.Binary;
using System.Collections.Immutable;
using System.Globalization;
using System.Text;
using System.Text.RegularExpressions;
using TmLab.Failures;
using TmLab.Quantities;

namespace TmLab.Storage.Frames;

/// <summary>
/// The pages of a TIFF file, found by walking its directories without decoding (TIFF 6.0, Adobe 1992, §2; BigTIFF). The decoding
/// library cannot tell the end of a file from a damaged link, and numbers pages with 16 bits; this walk does neither.
/// </summary>
internal sealed partial class TiffStructure
{
    private const int LongestDescription = 1 << 16;
    private const int Description = 270;
    private const int FillOrder = 266;
    private const int StripOffsets = 273;
    private const int StripByteCounts = 279;

    private readonly Stream _stream;
    private readonly string _name;
    private readonly long _length;
    private readonly List<long> _pages = [];
    private readonly List<long> _rawOffsets = [];
    private bool _isBig;
    private string? _description;

    private TiffStructure(Stream stream, string name)
    {
        _stream = stream;
        _name = name;
        _length = stream.Length;
    }

    /// <summary>Whether numbers are stored most significant byte first.</summary>
    public bool IsBigEndian { get; private set; }

    /// <summary>Where each page's directory begins.</summary>
    public IReadOnlyList<long> Pages => _pages;

    /// <summary>The format that all pages share.</summary>
    public TiffPageFormat Format { get; private set; }

    /// <summary>The size that all pages share.</summary>
    public ImageSize FrameSize { get; private set; }

    /// <summary>
    /// Number of frames: of pages, or, in files whose single directory announces more images, of those that stand back to back.
    /// </summary>
    public int FrameCount { get; private set; }

    /// <summary>
    /// Where a frame's counts stand in one uncompressed run of whole bytes, so that they need no decoding; null where they do not.
    /// </summary>
    public long? RawOffset(int frame)
    {
        long offset = frame < _rawOffsets.Count ? _rawOffsets[frame] : _rawOffsets[0] + (frame * FrameBytes);
        return offset < 0 ? null : offset;
    }

    private long FrameBytes => FrameSize.PixelCount * Format.Bits / 8;

    /// <summary>Walks all directories.</summary>
    /// <exception cref="BadInputException">No TIFF, cut short, damaged, of unequal pages, or of a kind that is not read.</exception>
    public static TiffStructure Read(Stream stream, string name)
    {
        var structure = new TiffStructure(stream, name);
        structure.Walk(structure.ReadHeader());
        structure.SettleFrameCount();
        return structure;
    }

    private long ReadHeader()
    {
        byte[] header = new byte[16];
        _stream.Position = 0;
        int read = _stream.ReadAtLeast(header, 8, throwOnEndOfStream: false);
        IsBigEndian = header.AsSpan().StartsWith("MM"u8);
        int magic = IsBigEndian ? BinaryPrimitives.ReadUInt16BigEndian(header.AsSpan(2)) : BinaryPrimitives.ReadUInt16LittleEndian(header.AsSpan(2));
        if (read < 8 || !(IsBigEndian || header.AsSpan().StartsWith("II"u8)) || magic is not (42 or 43))
        {
            throw new BadInputException(_name, null, "the file is not a TIFF file", "check frames.path and frames.kind");
        }

        _isBig = magic == 43;
        if (_isBig && IsBigEndian)
        {
            throw new BadInputException(_name, null, "the file is a big-endian BigTIFF, which is not read", "save it as little-endian BigTIFF or as classic TIFF");
        }

        return _isBig ? (long)UInt64(header.AsSpan(8)) : UInt32(header.AsSpan(4));
    }

    private void Walk(long offset)
    {
        var seen = new HashSet<long>();
        while (offset != 0)
        {
            if (!seen.Add(offset))
            {
                throw new BadInputException(_name, PagePlace(_pages.Count), "its directory is one that came before: the pages form a loop", "write the file again");
            }

            offset = ReadDirectory(offset);
        }

        if (_pages.Count == 0)
        {
            throw new BadInputException(_name, null, "the file holds no page", "check that it was written to its end");
        }
    }

    private long ReadDirectory(long offset)
    {
        int countBytes = _isBig ? 8 : 2;
        int entryBytes = _isBig ? 20 : 12;
        ReadOnlySpan<byte> count = ReadAt(offset, countBytes);
        ulong entries = _isBig ? UInt64(count) : UInt16(count);
        if (entries > 4096)
        {
            throw CutShort($"its directory claims {entries} entries");
        }

        int linkBytes = _isBig ? 8 : 4;
        byte[] directory = ReadAt(offset + countBytes, ((int)entries * entryBytes) + linkBytes);
        var tags = new Dictionary<int, long>();
        for (int i = 0; i < (int)entries; i++)
        {
            ReadEntry(directory.AsSpan(i * entryBytes, entryBytes), tags);
        }

        TakePage(offset, tags);
        ReadOnlySpan<byte> link = directory.AsSpan((int)entries * entryBytes);
        return _isBig ? (long)UInt64(link) : UInt32(link);
    }

    private void ReadEntry(ReadOnlySpan<byte> entry, Dictionary<int, long> tags)
    {
        int tag = UInt16(entry);
        int type = UInt16(entry[2..]);
        long count = _isBig ? (long)UInt64(entry[4..]) : UInt32(entry[4..]);
        ReadOnlySpan<byte> value = entry[(_isBig ? 12 : 8)..];
        if (tag == Description && _pages.Count == 0)
        {
            _description = ReadDescription(value, count);
        }
        else if (count == 1)
        {
            tags[tag] = type switch
            {
                1 => value[0],
                3 => UInt16(value),
                4 => UInt32(value),
                16 => (long)UInt64(value),
                _ => -1,
            };
        }
        else if (tag == 258)
        {
            // Several numbers of bits: several samples a pixel; tag 277 says so.
            tags[tag] = 0;
        }
    }

    private string ReadDescription(ReadOnlySpan<byte> value, long count)
    {
        int inline = _isBig ? 8 : 4;
        int length = (int)Math.Clamp(count, 0, LongestDescription);
        if (length <= inline)
        {
            return Encoding.UTF8.GetString(value[..length]);
        }

        long offset = _isBig ? (long)UInt64(value) : UInt32(value);
        bool isWhole = offset >= 0 && offset <= _length - length;
        return isWhole ? Encoding.UTF8.GetString(ReadAt(offset, length)) : "";
    }

    private void TakePage(long offset, Dictionary<int, long> tags)
    {
        long Tag(int tag, long otherwise) => tags.GetValueOrDefault(tag, otherwise);
        var format = new TiffPageFormat(Tag(256, 0), Tag(257, 0), Tag(258, 1), Tag(277, 1), Tag(259, 1), Tag(262, 1), Tag(339, 1));
        if (_pages.Count == 0)
        {
            TakeFormat(format);
        }
        else if (format != Format)
        {
            string found = (format.Width, format.Height) != (Format.Width, Format.Height)
                ? $"the page has {format.Width} × {format.Height} pixels, the first one {Format.Width} × {Format.Height}"
                : $"the page is of another kind ({format.Bits} bits, compression {format.Compression}) than the first ({Format.Bits} bits, compression {Format.Compression})";
            throw new BadInputException(_name, PagePlace(_pages.Count), found, "give frames of equal size and kind");
        }

        if (tags.TryGetValue(StripOffsets, out long data) && data + Tag(StripByteCounts, 0) > _length)
        {
            throw CutShort($"its data reach to byte {data + Tag(StripByteCounts, 0)}, the file ends at {_length}");
        }

        _pages.Add(offset);
        _rawOffsets.Add(IsRaw(format, tags) ? data : -1);
    }

    private bool IsRaw(TiffPageFormat format, Dictionary<int, long> tags) =>
        format.Compression == TiffPageFormat.Uncompressed && format.Bits is (8 or 16) && tags.ContainsKey(StripOffsets)
        && tags.GetValueOrDefault(FillOrder, 1) == 1 && tags.GetValueOrDefault(StripByteCounts, -1) >= FrameBytes;

    private void TakeFormat(TiffPageFormat format)
    {
        if (format.Objection() is { } objection)
        {
            throw new BadInputException(_name, PagePlace(0), objection.Found, objection.Remedy);
        }

        FrameSize = FrameSource.CheckedSize(format.Width, format.Height, _name, PagePlace(0));
        Format = format;
    }

    private void SettleFrameCount()
    {
        FrameCount = _pages.Count;
        int announced = AnnouncedImages();
        if (announced <= _pages.Count)
        {
            return;
        }

        if (_pages.Count > 1 || RawOffset(0) is not { } first)
        {
            throw new BadInputException(
                _name, PagePlace(_pages.Count), $"the file announces {announced} images but holds {_pages.Count} pages: it is cut short", "copy it again from the bench");
        }

        long whole = (_length - first) / FrameBytes;
        if (whole < announced)
        {
            throw new BadInputException(
                _name, PagePlace((int)whole), $"the file announces {announced} images back to back but has bytes for {whole}: it is cut short", "copy it again from the bench");
        }

        FrameCount = announced;
    }

    /// <summary>
    /// How many images the first page's description announces: <c>images=N</c> (stacks over 4 GB come with one directory and the
    /// frames back to back) or a JSON <c>"shape"</c> that ends in height and width; 0 when it says nothing.
    /// </summary>
    private int AnnouncedImages()
    {
        if (_description is null)
        {
            return 0;
        }

        Match images = ImagesKey().Match(_description);
        Match shape = ShapeKey().Match(_description);
        string? number = images.Success ? images.Groups[1].Value : null;
        if (number is null && shape.Success && Number(shape.Groups[2].Value) == Format.Height && Number(shape.Groups[3].Value) == Format.Width)
        {
            number = shape.Groups[1].Value;
        }

        return (int)Math.Min(Number(number), int.MaxValue);
    }

    private static long Number(string? digits) =>
        long.TryParse(digits, NumberStyles.None, CultureInfo.InvariantCulture, out long number) ? number : 0;

    private byte[] ReadAt(long offset, int bytes)
    {
        if (offset < 0 || offset > _length - bytes)
        {
            throw CutShort($"its directory should stand at byte {offset}, the file ends at {_length}");
        }

        byte[] read = new byte[bytes];
        _stream.Position = offset;
        _stream.ReadExactly(read);
        return read;
    }

    private BadInputException CutShort(string found) => new(
        _name, PagePlace(_pages.Count), $"{found}: the file is damaged or cut short after {_pages.Count} whole pages", "copy it again from the bench");

    private static string PagePlace(int page) => $"page {page}";

    private ushort UInt16(ReadOnlySpan<byte> b) => IsBigEndian ? BinaryPrimitives.ReadUInt16BigEndian(b) : BinaryPrimitives.ReadUInt16LittleEndian(b);

    private uint UInt32(ReadOnlySpan<byte> b) => IsBigEndian ? BinaryPrimitives.ReadUInt32BigEndian(b) : BinaryPrimitives.ReadUInt32LittleEndian(b);

    private ulong UInt64(ReadOnlySpan<byte> b) => IsBigEndian ? BinaryPrimitives.ReadUInt64BigEndian(b) : BinaryPrimitives.ReadUInt64LittleEndian(b);

    [GeneratedRegex(@"(?:^|\n)images=(\d+)")]
    private static partial Regex ImagesKey();

    [GeneratedRegex(@"""shape"":\s*\[\s*(\d+),\s*(\d+),\s*(\d+)\s*\]")]
    private static partial Regex ShapeKey();
}
