using PureHDF;
using PureHDF.Filters;
using TmLab.Failures;
using TmLab.Quantities;
using TmLab.Storage.Frames;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Frames;

public sealed class Hdf5FrameSourceTests : IDisposable
{
    private static readonly ImageSize Size = new(19, 12);

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Any_integer_type_gives_the_counts_that_were_written()
    {
        ushort[][] frames = SampleFrames.Make(5, Size, 7);
        ushort[] flat = [.. frames.SelectMany(f => f)];
        Check(frames, Array.ConvertAll(flat, c => (byte)c));
        Check(frames, Array.ConvertAll(flat, c => (sbyte)c));
        Check(frames, flat);
        Check(frames, Array.ConvertAll(flat, c => (short)c));
        Check(frames, Array.ConvertAll(flat, c => (uint)c));
        Check(frames, Array.ConvertAll(flat, c => (int)c));
        Check(frames, Array.ConvertAll(flat, c => (ulong)c));
        Check(frames, Array.ConvertAll(flat, c => (long)c));
    }

    [Theory]
    [InlineData(1u, 12u, 19u)]
    [InlineData(3u, 5u, 7u)]
    [InlineData(7u, 12u, 19u)]
    public void Chunked_and_compressed_frames_are_read(uint frames, uint rows, uint columns)
    {
        ushort[][] made = SampleFrames.Make(7, Size, 16);
        Write([.. made.SelectMany(f => f)], 7, [frames, rows, columns]);
        Assert.Equal(made, SampleFrames.ReadAll(Open("/acq/stack")));
    }

    [Fact]
    public void Numbers_stored_most_significant_byte_first_are_read()
    {
        ushort[][] frames = SampleFrames.Make(3, Size, 16);
        ushort[] swapped = Array.ConvertAll(frames.SelectMany(f => f).ToArray(), System.Buffers.Binary.BinaryPrimitives.ReverseEndianness);
        Write(swapped, 3);
        SetBigEndian(_folder.File("f.h5"));
        Assert.Equal(frames, SampleFrames.ReadAll(Open("/acq/stack")));
    }

    [Fact]
    public void An_absent_dataset_is_refused_with_the_nearest_one()
    {
        Write(new ushort[3 * Size.PixelCount], 3);
        Assert.Contains("/acq/stak: there is no such dataset; did you mean \"/acq/stack\"?", Message("/acq/stak"), StringComparison.Ordinal);
        Assert.Contains("did you mean \"/acq/stack\"?", Message("/acq/stack/deeper"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_group_is_refused()
    {
        Write(new ushort[3 * Size.PixelCount], 3);
        Assert.Contains("it is a group, not a dataset", Message("/acq"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_wrong_rank_is_refused()
    {
        new H5File { ["d"] = new H5Dataset(new ushort[12], fileDims: [3, 4]) }.Write(_folder.File("f.h5"));
        Assert.Contains("the dataset has 2 dimensions (3 × 4)", Message("d"), StringComparison.Ordinal);
    }

    [Fact]
    public void Floating_point_is_refused()
    {
        new H5File { ["d"] = new H5Dataset(new float[12], fileDims: [3, 2, 2]) }.Write(_folder.File("f.h5"));
        Assert.Contains("class FloatingPoint, not integers", Message("d"), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(-1)]
    [InlineData(65536)]
    [InlineData(int.MinValue)]
    public void A_value_that_is_no_count_is_named_with_frame_and_pixel(int value)
    {
        int[] counts = new int[3 * Size.PixelCount];
        counts[Size.PixelCount + Size.Width + 2] = value;
        Write(counts, 3);
        Assert.Contains($"frame 1, pixel 2,1: the value {value} lies outside", Message("/acq/stack"), StringComparison.Ordinal);
    }

    [Fact]
    public void A_file_cut_short_or_of_another_kind_is_refused()
    {
        Write(SampleFrames.Make(9, Size, 16).SelectMany(f => f).ToArray(), 9);
        byte[] bytes = File.ReadAllBytes(_folder.File("f.h5"));
        for (int length = 0; length < bytes.Length - 16; length += 331)
        {
            File.WriteAllBytes(_folder.File("f.h5"), bytes[..length]);
            Assert.StartsWith("f.h5", Message("/acq/stack"), StringComparison.Ordinal);
        }
    }

    private void Check<T>(ushort[][] frames, T[] flat)
    {
        Write(flat, frames.Length);
        Assert.Equal(frames, SampleFrames.ReadAll(Open("/acq/stack")));
    }

    private void Write<T>(T[] flat, int frames, uint[]? chunks = null)
    {
        var dataset = new H5Dataset(flat, chunks: chunks, fileDims: [(ulong)frames, (ulong)Size.Height, (ulong)Size.Width]);
        var options = new H5WriteOptions(Filters: chunks is null ? [] : [ShuffleFilter.Id, DeflateFilter.Id]);
        new H5File { ["acq"] = new H5Group { ["stack"] = dataset } }.Write(_folder.File("f.h5"), options);
    }

    /// <summary>
    /// Sets the byte-order bit of the one 16-bit unsigned datatype message in the file (HDF5 file format specification, version 3.0,
    /// IV.A.2.d: class and version 0x10 or 0x30, bit 0 of the class bit field, size 2, bit offset 0, precision 16).
    /// </summary>
    private static void SetBigEndian(string path)
    {
        byte[] bytes = File.ReadAllBytes(path);
        byte[] tail = [0, 0, 0, 2, 0, 0, 0, 0, 0, 16, 0];
        int at = Enumerable.Range(0, bytes.Length - 12).First(i => (bytes[i] & 0x0F) == 0 && bytes[i] >> 4 is >= 1 and <= 3 && bytes.AsSpan(i + 1, 11).SequenceEqual(tail));
        bytes[at + 1] = 1;
        File.WriteAllBytes(path, bytes);
    }

    private Hdf5FrameSource Open(string dataset) => new(_folder.File("f.h5"), "f.h5", dataset);

    private string Message(string dataset) => Assert.Throws<BadInputException>(() => SampleFrames.ReadAll(Open(dataset))).Message;
}
