using System.Buffers.Binary;
using System.IO.Compression;
using BitMiracle.LibTiff.Classic;
using CsCheck;
using TmLab.Failures;
using TmLab.Quantities;
using TmLab.Storage.Frames;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Frames;

public sealed class TiffFrameSourceTests : IDisposable
{
    private static readonly ImageSize Size = new(23, 18);

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    /// <summary>Files written by LibTiff (an independent implementation of TIFF 6.0 and BigTIFF).</summary>
    [Theory]
    [InlineData(8, "wl", Compression.NONE, 0)]
    [InlineData(12, "wl", Compression.NONE, 0)]
    [InlineData(16, "wl", Compression.NONE, 0)]
    [InlineData(16, "wb", Compression.NONE, 0)]
    [InlineData(12, "wb", Compression.NONE, 0)]
    [InlineData(16, "wl8", Compression.NONE, 0)]
    [InlineData(16, "wl", Compression.LZW, 0)]
    [InlineData(16, "wb", Compression.LZW, 0)]
    [InlineData(12, "wl", Compression.LZW, 0)]
    [InlineData(8, "wl", Compression.ADOBE_DEFLATE, 0)]
    [InlineData(16, "wb", Compression.ADOBE_DEFLATE, 0)]
    [InlineData(16, "wl", Compression.DEFLATE, 0)]
    [InlineData(16, "wl", Compression.NONE, 16)]
    [InlineData(16, "wb", Compression.ADOBE_DEFLATE, 16)]
    [InlineData(8, "wl", Compression.LZW, 16)]
    [InlineData(12, "wl", Compression.NONE, 16)]
    public void Every_dialect_gives_the_counts_that_were_written(int bits, string mode, Compression compression, int tileSide)
    {
        ushort[][] frames = SampleFrames.Make(5, Size, bits);
        SampleFrames.WriteTiff(_folder.File("f.tif"), frames, Size, bits, mode, compression, tileSide: tileSide);
        Assert.Equal(frames, Read("f.tif"));
    }

    [Fact]
    public void Horizontal_differencing_is_undone()
    {
        ushort[][] frames = SampleFrames.Make(3, Size, 16);
        SampleFrames.WriteTiff(_folder.File("f.tif"), frames, Size, 16, "wl", Compression.LZW, predictor: Predictor.HORIZONTAL);
        Assert.Equal(frames, Read("f.tif"));
    }

    /// <summary>Differences by hand after TIFF 6.0, section 14: the library's own writer takes them from swapped bytes.</summary>
    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void Horizontal_differencing_is_undone_in_either_byte_order(bool isLittleEndian)
    {
        ushort[][] frames = SampleFrames.Make(1, Size, 16);
        using var deflated = new MemoryStream();
        using (var zlib = new ZLibStream(deflated, CompressionLevel.Optimal, leaveOpen: true))
        {
            for (int i = 0; i < Size.PixelCount; i++)
            {
                var difference = (ushort)(frames[0][i] - (i % Size.Width == 0 ? 0 : frames[0][i - 1]));
                (byte low, byte high) = ((byte)difference, (byte)(difference >> 8));
                zlib.Write(isLittleEndian ? [low, high] : [high, low]);
            }
        }

        File.WriteAllBytes(_folder.File("f.tif"), HandWritten(deflated.ToArray(), 8, 2, "differenced", isLittleEndian));
        Assert.Equal(frames, Read("f.tif"));
    }

    [Fact]
    public void Any_frames_in_any_strips_are_read_back() =>
        Gen.Select(Gen.Int[1, 40], Gen.Int[1, 40], Gen.Int[1, 45], Gen.OneOf(8, 12, 16), Gen.Int[1, 3], Gen.Int[0, 1000]).Sample(
            (width, height, rows, bits, count, seed) =>
            {
                var size = new ImageSize(width, height);
                ushort[][] frames = SampleFrames.Make(count, size, bits, seed);
                using var folder = new TemporaryFolder();
                SampleFrames.WriteTiff(folder.File("f.tif"), frames, size, bits, "wl", Compression.NONE, rows);
                Assert.Equal(frames, SampleFrames.ReadAll(new TiffFrameSource([folder.File("f.tif")], ["f.tif"])));
            },
            iter: 60);

    [Fact]
    public void Several_files_follow_one_another_and_places_name_the_file()
    {
        ushort[][] frames = SampleFrames.Make(5, Size, 16);
        SampleFrames.WriteTiff(_folder.File("a.tif"), frames[..2], Size, 16);
        SampleFrames.WriteTiff(_folder.File("b.tif"), frames[2..], Size, 16);
        using var source = new TiffFrameSource([_folder.File("a.tif"), _folder.File("b.tif")], ["a.tif", "b.tif"]);
        Assert.Equal(5, source.FrameCount);
        var frame = new ushort[Size.PixelCount];
        source.ReadNext(frame);
        Assert.Equal(("a.tif", "page 1"), source.NextFrame);
        source.ReadNext(frame);
        Assert.Equal(("b.tif", "page 0"), source.NextFrame);
        source.ReadNext(frame);
        Assert.Equal(frames[2], frame);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(18)]
    public void A_stack_cut_short_anywhere_is_refused_with_page_and_counts(int rowsPerStrip)
    {
        ushort[][] frames = SampleFrames.Make(4, Size, 16);
        string whole = _folder.File("f.tif");
        SampleFrames.WriteTiff(whole, frames, Size, 16, rowsPerStrip: rowsPerStrip);
        byte[] bytes = File.ReadAllBytes(whole);
        for (int length = 8; length < bytes.Length - 1; length += 97)
        {
            File.WriteAllBytes(_folder.File("cut.tif"), bytes[..length]);
            BadInputException bad = Assert.Throws<BadInputException>(() => Read("cut.tif"));
            Assert.StartsWith("cut.tif, page ", bad.Message, StringComparison.Ordinal);
            Assert.Contains("cut short", bad.Message, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void A_truncated_compressed_page_is_refused_with_its_number()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(2, Size, 16), Size, 16, compression: Compression.LZW);
        byte[] bytes = File.ReadAllBytes(_folder.File("f.tif"));

        // The first page's data begin right behind the 8-byte header.
        bytes.AsSpan(9, 300).Fill(0xFF);
        File.WriteAllBytes(_folder.File("bad.tif"), bytes);
        BadInputException bad = Assert.Throws<BadInputException>(() => Read("bad.tif"));
        Assert.Equal("page 0 of 2", bad.Problems[0].Place);
    }

    [Theory]
    [InlineData(true, false)]
    [InlineData(false, false)]
    [InlineData(true, true)]
    public void Frames_back_to_back_behind_one_directory_are_all_read(bool isLittleEndian, bool asShape)
    {
        ushort[][] frames = SampleFrames.Make(6, Size, 16);
        string description = asShape ? $$"""{"shape": [6, {{Size.Height}}, {{Size.Width}}]}""" : "made by a stack writer\nimages=6\nslices=6\n";
        File.WriteAllBytes(_folder.File("f.tif"), BackToBack(frames, description, isLittleEndian));
        Assert.Equal(frames, Read("f.tif"));
    }

    [Fact]
    public void A_back_to_back_stack_cut_short_is_refused_with_both_counts()
    {
        byte[] bytes = BackToBack(SampleFrames.Make(6, Size, 16), "images=6\n", true);
        File.WriteAllBytes(_folder.File("f.tif"), bytes[..^10]);
        Assert.Contains("announces 6 images back to back but has bytes for 5", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void Fewer_pages_than_announced_are_refused()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(3, Size, 16), Size, 16, description: "images=5\n");
        Assert.Contains("announces 5 images but holds 3 pages", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_page_of_another_size_is_named()
    {
        string path = _folder.File("f.tif");
        SampleFrames.WriteTiff(path, SampleFrames.Make(2, Size, 16), Size, 16);
        SampleFrames.WriteTiff(path, SampleFrames.Make(1, new ImageSize(20, 18), 16), new ImageSize(20, 18), 16, "a");
        Assert.StartsWith("f.tif, page 2: the page has 20 × 18 pixels, the first one 23 × 18", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void Colour_is_refused()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(1, Size, 8), Size, 8, samples: 3);
        Assert.Contains("page 0: a pixel has 3 samples", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_big_endian_bigtiff_is_refused_plainly()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(1, Size, 16), Size, 16, "wb8");
        Assert.Contains("big-endian BigTIFF", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void Directories_that_form_a_loop_are_refused()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(1, Size, 16), Size, 16, "wl");
        byte[] bytes = File.ReadAllBytes(_folder.File("f.tif"));
        int directory = BinaryPrimitives.ReadInt32LittleEndian(bytes.AsSpan(4));
        int entries = BinaryPrimitives.ReadUInt16LittleEndian(bytes.AsSpan(directory));
        BinaryPrimitives.WriteInt32LittleEndian(bytes.AsSpan(directory + 2 + (12 * entries)), directory);
        File.WriteAllBytes(_folder.File("f.tif"), bytes);
        Assert.Contains("form a loop", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void An_absurd_size_is_refused_before_memory_is_taken()
    {
        byte[] bytes = BackToBack(SampleFrames.Make(1, Size, 16), "x", true);
        BinaryPrimitives.WriteInt32LittleEndian(bytes.AsSpan(8 + 2 + 8), 1_000_000);
        BinaryPrimitives.WriteInt32LittleEndian(bytes.AsSpan(8 + 2 + 12 + 8), 1_000_000);
        File.WriteAllBytes(_folder.File("f.tif"), bytes);
        Assert.Contains("claims frames of 1000000 × 1000000", Message("f.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void Any_damage_gives_counts_or_bad_input_and_nothing_else()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(2, Size, 16), Size, 16, "wl", Compression.LZW);
        byte[] good = File.ReadAllBytes(_folder.File("f.tif"));
        Gen.Select(Gen.Int[0, good.Length - 1], Gen.Byte).Sample(
            (at, value) =>
            {
                byte[] damaged = [.. good];
                damaged[at] = value;
                using var folder = new TemporaryFolder();
                File.WriteAllBytes(folder.File("d.tif"), damaged);
                Exception? thrown = Record.Exception(() => SampleFrames.ReadAll(new TiffFrameSource([folder.File("d.tif")], ["d.tif"])));
                Assert.True(thrown is null or BadInputException, thrown?.ToString());
            },
            iter: 300);
    }

    private ushort[][] Read(string name) => SampleFrames.ReadAll(new TiffFrameSource([_folder.File(name)], [name]));

    private string Message(string name) => Assert.Throws<BadInputException>(() => Read(name)).Message;

    private static byte[] BackToBack(ushort[][] frames, string description, bool isLittleEndian) => HandWritten(
        [.. frames.SelectMany(f => f).SelectMany(c => isLittleEndian ? new[] { (byte)c, (byte)(c >> 8) } : [(byte)(c >> 8), (byte)c])],
        1, 1, description, isLittleEndian);

    /// <summary>A file of one directory with data behind it, written by hand after TIFF 6.0, section 2.</summary>
    private static byte[] HandWritten(byte[] data, int compression, int predictor, string description, bool isLittleEndian)
    {
        byte[] text = System.Text.Encoding.UTF8.GetBytes(description + "\0\0\0\0");
        const int Entries = 10;
        int textAt = 8 + 2 + (12 * Entries) + 4;
        int dataAt = textAt + text.Length;
        byte[] file = new byte[dataAt + data.Length];
        void Put16(int at, int value)
        {
            if (isLittleEndian)
            {
                BinaryPrimitives.WriteUInt16LittleEndian(file.AsSpan(at), (ushort)value);
            }
            else
            {
                BinaryPrimitives.WriteUInt16BigEndian(file.AsSpan(at), (ushort)value);
            }
        }

        void Put32(int at, int value)
        {
            Put16(at + (isLittleEndian ? 0 : 2), value & 0xFFFF);
            Put16(at + (isLittleEndian ? 2 : 0), value >> 16);
        }

        (isLittleEndian ? "II"u8 : "MM"u8).CopyTo(file);
        Put16(2, 42);
        Put32(4, 8);
        Put16(8, Entries);
        (int Tag, int Type, int Count, int Value)[] entries =
        [
            (256, 4, 1, Size.Width), (257, 4, 1, Size.Height), (258, 3, 1, 16), (259, 3, 1, compression), (262, 3, 1, 1),
            (270, 2, text.Length, textAt), (273, 4, 1, dataAt), (277, 3, 1, 1), (279, 4, 1, compression == 1 ? Size.PixelCount * 2 : data.Length), (317, 3, 1, predictor),
        ];
        for (int i = 0; i < Entries; i++)
        {
            int at = 10 + (12 * i);
            Put16(at, entries[i].Tag);
            Put16(at + 2, entries[i].Type);
            Put32(at + 4, entries[i].Count);
            (entries[i].Type == 3 ? (Action<int, int>)Put16 : Put32)(at + 8, entries[i].Value);
        }

        text.CopyTo(file, textAt);
        data.CopyTo(file, dataAt);
        return file;
    }
}
