using CsCheck;
using SixLabors.ImageSharp;
using SixLabors.ImageSharp.Formats.Bmp;
using SixLabors.ImageSharp.PixelFormats;
using TmLab.Failures;
using TmLab.Quantities;
using TmLab.Shaping;
using TmLab.Storage.Images;
using Xunit;

namespace TmLab.Storage.Tests.Images;

public sealed class ModulatorImageFileTests
{
    private static readonly ImageSize AllLevels = new(16, 16);

    [Fact]
    public void Any_image_written_and_read_is_the_same() =>
        Gen.Select(Gen.Int[1, 70], Gen.Int[1, 20], Gen.Enum<ModulatorImageDepth>(), Gen.Enum<ModulatorImageFormat>(), Gen.Int[0, 1000]).Sample(
            (width, height, depth, format, seed) =>
            {
                var random = new Random(seed);
                var size = new ImageSize(width, height);
                int most = depth == ModulatorImageDepth.OneBit ? 2 : 256;
                var image = new ModulatorImage(size, [.. Enumerable.Range(0, size.PixelCount).Select(_ => (byte)random.Next(most))], depth);
                ModulatorImage read = ModulatorImageFile.Read(new MemoryStream(Written(image, format)), "m");
                Assert.Equal((image.Size, image.Depth), (read.Size, read.Depth));
                Assert.Equal(image.Levels.AsEnumerable(), read.Levels);
            },
            iter: 200);

    /// <summary>Chunk names after the PNG specification, third edition (W3C 2025), §11: gAMA, cHRM, sRGB, iCCP would change colours.</summary>
    [Theory]
    [InlineData(ModulatorImageDepth.EightBit, 8)]
    [InlineData(ModulatorImageDepth.OneBit, 1)]
    public void A_png_is_grey_and_carries_header_data_and_end_alone(ModulatorImageDepth depth, int bits)
    {
        byte[] png = Written(new ModulatorImage(new ImageSize(2, 2), [0, 1, 1, 0], depth), ModulatorImageFormat.Png);
        Assert.Equal((bits, 0), ((int)png[24], (int)png[25]));
        var chunks = new List<string>();
        for (int at = 8; at < png.Length;)
        {
            int length = System.Buffers.Binary.BinaryPrimitives.ReadInt32BigEndian(png.AsSpan(at));
            chunks.Add(System.Text.Encoding.ASCII.GetString(png, at + 4, 4));
            at += length + 12;
        }

        Assert.Equal(["IHDR", "IDAT", "IEND"], chunks.Distinct());
    }

    /// <summary>Values of BITMAPFILEHEADER and BITMAPINFOHEADER as Microsoft documents them.</summary>
    [Fact]
    public void A_one_bit_bmp_has_the_documented_bytes()
    {
        byte[] bmp = Written(new ModulatorImage(new ImageSize(10, 2), [1, 0, 0, 0, 0, 0, 0, 1, 1, 0, 0, 1, 0, 0, 0, 0, 0, 0, 0, 1], ModulatorImageDepth.OneBit), ModulatorImageFormat.Bmp);
        Assert.Equal(62 + 8, bmp.Length);
        Assert.Equal([0b0100_0000, 0b0100_0000, 0, 0, 0b1000_0001, 0b1000_0000, 0, 0], bmp[62..]);
    }

    [Fact]
    public void All_grey_levels_survive_in_another_reader()
    {
        var image = new ModulatorImage(AllLevels, [.. Enumerable.Range(0, 256).Select(g => (byte)g)]);
        foreach (ModulatorImageFormat format in Enum.GetValues<ModulatorImageFormat>())
        {
            using Image<L8> read = Image.Load<L8>(Written(image, format));
            byte[] levels = new byte[256];
            read.CopyPixelDataTo(levels);
            Assert.Equal(image.Levels.AsEnumerable(), levels);
        }
    }

    [Fact]
    public void A_coloured_bmp_is_refused_with_its_first_coloured_pixel()
    {
        using var image = new Image<Rgb24>(4, 3);
        image[2, 1] = new Rgb24(1, 2, 3);
        using var stream = new MemoryStream();
        image.Save(stream, new BmpEncoder { BitsPerPixel = BmpBitsPerPixel.Pixel24 });
        Assert.Contains("m.bmp, pixel 2,1: the image is coloured", Message(stream.ToArray(), "m.bmp"), StringComparison.Ordinal);
    }

    [Fact]
    public void Damage_is_refused()
    {
        byte[] png = Written(new ModulatorImage(AllLevels, [.. new byte[256]]), ModulatorImageFormat.Png);
        Assert.Contains("cut short", Message(png[..^13], "m.png"), StringComparison.Ordinal);
        Assert.Contains("m.png", Message([1, 2, 3], "m.png"), StringComparison.Ordinal);
        Assert.Contains("m.png", Message([], "m.png"), StringComparison.Ordinal);
    }

    [Fact]
    public void One_bit_levels_above_one_are_a_wrong_call() =>
        Assert.Throws<ArgumentException>(() => new ModulatorImage(new ImageSize(1, 1), [2], ModulatorImageDepth.OneBit));

    private static byte[] Written(ModulatorImage image, ModulatorImageFormat format)
    {
        using var stream = new MemoryStream();
        ModulatorImageFile.Write(image, format, stream);
        return stream.ToArray();
    }

    private static string Message(byte[] file, string name) =>
        Assert.Throws<BadInputException>(() => ModulatorImageFile.Read(new MemoryStream(file), name)).Message;
}
