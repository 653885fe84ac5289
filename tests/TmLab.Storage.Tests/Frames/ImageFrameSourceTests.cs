using SixLabors.ImageSharp;
using SixLabors.ImageSharp.PixelFormats;
using TmLab.Failures;
using TmLab.Quantities;
using TmLab.Storage.Frames;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Frames;

public sealed class ImageFrameSourceTests : IDisposable
{
    private static readonly ImageSize FrameSize = new(21, 13);

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData(8)]
    [InlineData(16)]
    public void Png_frames_come_in_natural_order_with_their_counts(int bits)
    {
        ushort[][] frames = SampleFrames.Make(12, FrameSize, bits);
        for (int i = 0; i < frames.Length; i++)
        {
            SampleFrames.WritePng(_folder.File($"frames/f{i}.png"), frames[i], FrameSize, bits);
        }

        _folder.Write("frames/._f3.png", "a file manager's side file");
        Assert.Equal(frames, SampleFrames.ReadAll(Open("frames/*.png")));
    }

    [Fact]
    public void Single_page_tiff_frames_are_read()
    {
        ushort[][] frames = SampleFrames.Make(3, FrameSize, 12);
        for (int i = 0; i < frames.Length; i++)
        {
            SampleFrames.WriteTiff(_folder.File($"f{i}.tif"), frames[i..(i + 1)], FrameSize, 12, "wb");
        }

        Assert.Equal(frames, SampleFrames.ReadAll(Open("f*.tif")));
    }

    [Fact]
    public void A_tiff_of_several_pages_is_refused()
    {
        SampleFrames.WriteTiff(_folder.File("f0.tif"), SampleFrames.Make(2, FrameSize, 16), FrameSize, 16);
        Assert.Contains("f0.tif, frame 0: the file holds 2 pages", Message("f*.tif"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_colour_png_is_refused()
    {
        using (var image = new Image<Rgb24>(FrameSize.Width, FrameSize.Height))
        {
            image.SaveAsPng(_folder.File("f0.png"));
        }

        Assert.Contains("f0.png, frame 0: the image is coloured", Message("f*.png"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_frame_of_another_size_is_named()
    {
        SampleFrames.WritePng(_folder.File("f0.png"), SampleFrames.Make(1, FrameSize, 16)[0], FrameSize, 16);
        var other = new ImageSize(20, 13);
        SampleFrames.WritePng(_folder.File("f1.png"), SampleFrames.Make(1, other, 16)[0], other, 16);
        Assert.StartsWith("f1.png, frame 1: the frame has 20 × 13 pixels, the first one 21 × 13", Message("f*.png"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_png_cut_short_anywhere_is_refused()
    {
        SampleFrames.WritePng(_folder.File("whole.png"), SampleFrames.Make(1, FrameSize, 16)[0], FrameSize, 16);
        byte[] bytes = File.ReadAllBytes(_folder.File("whole.png"));
        for (int length = 0; length < bytes.Length; length += 13)
        {
            File.WriteAllBytes(_folder.File("f0.png"), bytes[..length]);
            Assert.StartsWith("f0.png", Message("f*.png"), StringComparison.Ordinal);
        }
    }

    [Fact]
    public void Damaged_image_data_are_refused()
    {
        SampleFrames.WritePng(_folder.File("f0.png"), SampleFrames.Make(1, FrameSize, 16)[0], FrameSize, 16);
        byte[] bytes = File.ReadAllBytes(_folder.File("f0.png"));
        bytes[bytes.Length / 2] ^= 0x55;
        File.WriteAllBytes(_folder.File("f0.png"), bytes);
        Assert.Contains("f0.png, frame 0: the image is damaged", Message("f*.png"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_pattern_without_files_is_refused() =>
        Assert.Contains("no file matches the pattern", Message("g*.png"), StringComparison.Ordinal);

    [Theory]
    [InlineData("f2.png", "f10.png")]
    [InlineData("a9b2", "a10b1")]
    [InlineData("f01", "f1a")]
    [InlineData("f", "f0")]
    [InlineData("f99999999999999999998", "f99999999999999999999")]
    public void Natural_order_counts_as_people_do(string first, string second)
    {
        Assert.True(NaturalOrder.Instance.Compare(first, second) < 0);
        Assert.True(NaturalOrder.Instance.Compare(second, first) > 0);
        Assert.Equal(0, NaturalOrder.Instance.Compare(first, first));
    }

    private ImageFrameSource Open(string pattern) => new(Path.Combine(_folder.Path, pattern), pattern);

    private string Message(string pattern) => Assert.Throws<BadInputException>(() => SampleFrames.ReadAll(Open(pattern))).Message;
}
