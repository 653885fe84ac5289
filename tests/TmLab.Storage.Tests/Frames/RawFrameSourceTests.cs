using System.Buffers.Binary;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Storage.Frames;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Frames;

public sealed class RawFrameSourceTests : IDisposable
{
    private static readonly ImageSize Size = new(31, 17);

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData(RawPixelFormat.UInt8, 0)]
    [InlineData(RawPixelFormat.UInt8, 5)]
    [InlineData(RawPixelFormat.UInt16LittleEndian, 0)]
    [InlineData(RawPixelFormat.UInt16LittleEndian, 513)]
    [InlineData(RawPixelFormat.UInt16BigEndian, 64)]
    public void Every_pixel_format_gives_the_counts_that_were_written(RawPixelFormat format, int headerBytes)
    {
        ushort[][] frames = SampleFrames.Make(4, Size, format == RawPixelFormat.UInt8 ? 8 : 16);
        Write(frames, format, headerBytes, 0);
        Assert.Equal(frames, SampleFrames.ReadAll(Open(format, headerBytes)));
    }

    [Fact]
    public void A_remainder_is_refused_with_its_bytes()
    {
        Write(SampleFrames.Make(3, Size, 16), RawPixelFormat.UInt16LittleEndian, 0, 11);
        BadInputException bad = Assert.Throws<BadInputException>(() => Open(RawPixelFormat.UInt16LittleEndian, 0));
        Assert.StartsWith("f.raw: 3 frames of 1054 bytes leave 11 bytes over", bad.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_file_without_a_whole_frame_is_refused()
    {
        File.WriteAllBytes(_folder.File("f.raw"), new byte[100]);
        BadInputException bad = Assert.Throws<BadInputException>(() => Open(RawPixelFormat.UInt16LittleEndian, 10));
        Assert.Contains("the file has 100 bytes", bad.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_missing_file_is_named()
    {
        BadInputException bad = Assert.Throws<BadInputException>(() => Open(RawPixelFormat.UInt8, 0));
        Assert.StartsWith("f.raw: there is no such file", bad.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Reading_past_the_last_frame_is_a_wrong_call()
    {
        Write(SampleFrames.Make(1, Size, 8), RawPixelFormat.UInt8, 0, 0);
        using RawFrameSource source = Open(RawPixelFormat.UInt8, 0);
        source.ReadNext(new ushort[Size.PixelCount]);
        Assert.Throws<InvalidOperationException>(() => source.ReadNext(new ushort[Size.PixelCount]));
    }

    private RawFrameSource Open(RawPixelFormat format, int headerBytes) => new(Path.Combine(_folder.Path, "f.raw"), "f.raw", Size, format, headerBytes);

    private void Write(ushort[][] frames, RawPixelFormat format, int headerBytes, int over)
    {
        using FileStream stream = File.Create(_folder.File("f.raw"));
        stream.Write(new byte[headerBytes]);
        Span<byte> pixel = stackalloc byte[2];
        foreach (ushort count in frames.SelectMany(f => f))
        {
            switch (format)
            {
                case RawPixelFormat.UInt8:
                    stream.WriteByte((byte)count);
                    continue;
                case RawPixelFormat.UInt16LittleEndian:
                    BinaryPrimitives.WriteUInt16LittleEndian(pixel, count);
                    break;
                default:
                    BinaryPrimitives.WriteUInt16BigEndian(pixel, count);
                    break;
            }

            stream.Write(pixel);
        }

        stream.Write(new byte[over]);
    }
}
