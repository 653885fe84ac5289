using CsCheck;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.StageFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.StageFiles;

public sealed class RoundTripTests
{
    [Fact]
    public void A_measurement_reads_back_exactly_at_any_shape() =>
        Gen.Select(Gen.Int[1, 12], Gen.Int[1, 9], Gen.Int[1, 9], Gen.Bool).Sample(
            (frames, width, height, full) =>
            {
                using var folder = new TemporaryFolder();
                var size = new ImageSize(width, height);
                StageSamples.WriteMeasurement(folder.File("m.h5"), frames, size, full);
                Assert.Equal(["m.h5"], folder.FileNames);
                using var reader = new MeasurementFileReader(folder.File("m.h5"));
                Assert.Equal(frames, reader.FrameCount);
                Assert.Equal(size, reader.FrameSize);
                SameContent.Assert(StageSamples.MeasurementFacts(frames, size, full), reader.Facts);
                SameContent.Assert(StageSamples.Provenance, reader.Provenance);
                RequireCounts(reader, 0, frames, 0, size.PixelCount);
                RequireCounts(reader, frames / 2, frames - (frames / 2), size.PixelCount / 3, size.PixelCount - (size.PixelCount / 3));
                reader.Verify(null, TestContext.Current.CancellationToken);
            },
            iter: 15,
            threads: 1);

    [Fact]
    public void A_matrix_reads_back_exactly_at_any_shape() =>
        Gen.Select(Gen.Int[1, 20], Gen.Int[1, 20], Gen.Bool).Sample(
            (rows, columns, full) =>
            {
                using var folder = new TemporaryFolder();
                StageSamples.WriteMatrix(folder.File("t.h5"), rows, columns, full);
                Assert.Equal(["t.h5"], folder.FileNames);
                using var reader = new MatrixFileReader(folder.File("t.h5"));
                SameContent.Assert(StageSamples.MatrixFacts(rows, columns, full), reader.Facts);
                SameContent.Assert(StageSamples.Provenance, reader.Provenance);
                RequireRows(reader, rows, columns);
                reader.Verify(null, TestContext.Current.CancellationToken);
            },
            iter: 15,
            threads: 1);

    [Theory]
    [InlineData(1, 1, 1, true)]
    [InlineData(1, 1, 0, false)]
    [InlineData(9, 4, 4, true)]
    [InlineData(9, 4, 2, false)]
    [InlineData(9, 4, 0, true)]
    public void Channels_read_back_exactly(int pixels, int modes, int channels, bool full)
    {
        using var folder = new TemporaryFolder();
        StageSamples.WriteChannels(folder.File("c.h5"), pixels, modes, channels, full);
        using var reader = new ChannelFileReader(folder.File("c.h5"));
        SameContent.Assert(StageSamples.ChannelFacts(pixels, modes, channels, full), reader.Facts);
        Assert.Equal(channels == 0, reader.InputModes is null);
        if (reader.InputModes is { } input && reader.OutputModes is { } output)
        {
            RequireRows(input, modes, channels);
            RequireRows(output, pixels, channels);
        }

        reader.Verify(null, TestContext.Current.CancellationToken);
    }

    [Fact]
    public void Rows_may_be_written_and_read_from_several_threads()
    {
        // Rows of 4,000 bytes: the blocks of the checksums end in the middle of rows.
        const int rows = 3000;
        const int columns = 500;
        using var folder = new TemporaryFolder();
        using (var writer = new MatrixFileWriter(folder.File("t.h5"), false, StageSamples.Provenance, rows, columns))
        {
            Parallel.For(0, rows, p => writer.WriteRows(p, Row(p, columns)));
            writer.Complete(StageSamples.MatrixFacts(rows, columns));
        }

        using var reader = new MatrixFileReader(folder.File("t.h5"));
        reader.Verify(null, TestContext.Current.CancellationToken);
        Parallel.For(0, rows, p =>
        {
            var found = new Complex64[columns];
            reader.ReadRows(p, 1, found);
            Assert.Equal(Row(p, columns), found);
        });
    }

    [Theory]
    [InlineData(10)]
    [InlineData(59_999)]
    [InlineData(60_000)]
    [InlineData(65_535)]
    [InlineData(65_536)]
    [InlineData(70_000)]
    [InlineData(1_000_000)]
    public void Settings_of_any_length_survive(int length)
    {
        using var folder = new TemporaryFolder();
        string settings = "{\"é\":\"" + new string('x', length) + "\"}";
        var provenance = new StageProvenance([], settings, "1", DateTimeOffset.UnixEpoch);
        using (var writer = new MatrixFileWriter(folder.File("t.h5"), false, provenance, 1, 1))
        {
            writer.WriteRows(0, [new Complex64(1, 2)]);
            writer.Complete(StageSamples.MatrixFacts(1, 1));
        }

        using var reader = new MatrixFileReader(folder.File("t.h5"));
        SameContent.Assert(provenance, reader.Provenance);
    }

    [Fact]
    public void The_largest_number_of_parents_survives()
    {
        using var folder = new TemporaryFolder();
        var provenance = new StageProvenance(
            [.. Enumerable.Range(0, StageProvenance.MostParents).Select(k => new StageParent($"frame-{k}.png", new string('c', 64)))],
            "{}",
            "1",
            DateTimeOffset.UnixEpoch);
        using (var writer = new MatrixFileWriter(folder.File("t.h5"), false, provenance, 1, 1))
        {
            writer.WriteRows(0, [new Complex64(1, 2)]);
            writer.Complete(StageSamples.MatrixFacts(1, 1));
        }

        SameContent.Assert(provenance, StageFile.Describe(folder.File("t.h5")).Provenance);
    }

    [Fact]
    public void Blocks_that_leave_the_data_are_wrong_calls()
    {
        using var folder = new TemporaryFolder();
        StageSamples.WriteMatrix(folder.File("t.h5"), 4, 3);
        StageSamples.WriteMeasurement(folder.File("m.h5"), 3, new ImageSize(4, 2));
        using var matrix = new MatrixFileReader(folder.File("t.h5"));
        using var frames = new MeasurementFileReader(folder.File("m.h5"));
        Assert.ThrowsAny<ArgumentException>(() => matrix.ReadRows(3, 2, new Complex64[6]));
        Assert.ThrowsAny<ArgumentException>(() => matrix.ReadRows(-1, 1, new Complex64[6]));
        Assert.ThrowsAny<ArgumentException>(() => matrix.ReadRows(0, 2, new Complex64[5]));
        Assert.ThrowsAny<ArgumentException>(() => frames.Read(2, 2, 0, 8, new ushort[16]));
        Assert.ThrowsAny<ArgumentException>(() => frames.Read(0, 1, 4, 5, new ushort[5]));
        Assert.ThrowsAny<ArgumentException>(() => frames.Read(0, 2, 0, 8, new ushort[15]));
    }

    [Fact]
    public void Dimensions_and_facts_that_do_not_fit_are_wrong_calls()
    {
        using var folder = new TemporaryFolder();
        using var writer = new MatrixFileWriter(folder.File("t.h5"), false, StageSamples.Provenance, 2, 3);
        StageSamples.WriteRows(writer, 2, 3);
        Assert.ThrowsAny<ArgumentException>(() => writer.WriteRows(0, new Complex64[4]));
        Assert.ThrowsAny<ArgumentException>(() => writer.WriteRows(1, new Complex64[6]));
        Assert.ThrowsAny<ArgumentException>(() => writer.Complete(StageSamples.MatrixFacts(3, 3)));
    }

    [Fact]
    public void The_description_lists_every_dataset_with_a_unit()
    {
        using var folder = new TemporaryFolder();
        StageSamples.WriteMeasurement(folder.File("m.h5"), 3, new ImageSize(4, 2));
        StageFileDescription description = StageFile.Describe(folder.File("m.h5"));
        Assert.Equal(StageFormat.Measurement, description.Format);
        Assert.Equal(1, description.FormatVersion);
        Assert.True(description.IsSealed);
        Assert.Equal(new FileInfo(folder.File("m.h5")).Length, description.Length);
        Assert.DoesNotContain(description.Datasets, d => d.Units is null);
        DatasetDescription counts = Assert.Single(description.Datasets, d => d.Path == "/frames/counts");
        Assert.Equal([3L, 2L, 4L], counts.Shape);
        Assert.Equal(("uint16", "count"), (counts.ElementType, counts.Units));
        Assert.Equal("complex128", Assert.Single(description.Datasets, d => d.Path == "/modes/custom_patterns").ElementType);
    }

    private static void RequireCounts(MeasurementFileReader reader, int firstFrame, int frames, int firstPixel, int pixels)
    {
        ushort[] found = new ushort[frames * pixels];
        reader.Read(firstFrame, frames, firstPixel, pixels, found);
        for (int k = 0; k < found.Length; k++)
        {
            Assert.Equal(StageSamples.Count(firstFrame + (k / pixels), firstPixel + (k % pixels)), found[k]);
        }
    }

    private static void RequireRows(IRowBlockReader reader, int rows, int columns)
    {
        Assert.Equal((rows, columns), (reader.RowCount, reader.ColumnCount));
        var found = new Complex64[rows * columns];
        reader.ReadRows(0, rows, found);
        Assert.Equal(Enumerable.Range(0, rows).SelectMany(p => Row(p, columns)), found);
        var last = new Complex64[columns];
        reader.ReadRows(rows - 1, 1, last);
        Assert.Equal(Row(rows - 1, columns), last);
    }

    private static Complex64[] Row(int row, int columns) => [.. Enumerable.Range(0, columns).Select(n => StageSamples.Element(row, n))];
}
