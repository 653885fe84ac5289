using TmLab.Failures;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.StageFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.StageFiles;

public sealed class UnfinishedOutputTests
{
    [Fact]
    public void An_exception_while_writing_leaves_nothing()
    {
        // The HDF5 library would finish a valid-looking file full of zeros while the exception unwinds.
        using var folder = new TemporaryFolder();
        Assert.Throws<NumericalException>(() => FailWhileWriting(folder.File("t.h5")));
        Assert.Empty(folder.FileNames);
    }

    [Fact]
    public void A_file_that_is_replaced_stays_until_the_new_one_is_whole()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("t.h5");
        StageSamples.WriteMatrix(path, 3, 2);
        byte[] before = File.ReadAllBytes(path);
        using (var writer = new MatrixFileWriter(path, true, StageSamples.Provenance, 4, 4))
        {
            writer.WriteRows(0, new Complex64[16]);
            Assert.Equal(before, File.ReadAllBytes(path));
        }

        Assert.Equal(before, File.ReadAllBytes(path));
        Assert.Equal(["t.h5"], folder.FileNames);
        StageSamples.WriteMatrix(path, 5, 2, overwrite: true);
        using var reader = new MatrixFileReader(path);
        Assert.Equal(5, reader.RowCount);
    }

    [Fact]
    public void An_existing_file_and_a_second_writer_are_refused_at_the_start()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("t.h5");
        using (var first = new MatrixFileWriter(path, false, StageSamples.Provenance, 3, 2))
        {
            OutputException busy = Assert.Throws<OutputException>(
                () => new MatrixFileWriter(path, false, StageSamples.Provenance, 3, 2));
            Assert.Equal(OutputFailure.Busy, busy.Failure);
            StageSamples.WriteRows(first, 3, 2);
            first.Complete(StageSamples.MatrixFacts(3, 2));
        }

        OutputException exists = Assert.Throws<OutputException>(() => new MatrixFileWriter(path, false, StageSamples.Provenance, 3, 2));
        Assert.Equal(OutputFailure.Exists, exists.Failure);
    }

    [Fact]
    public void Rows_that_were_never_or_twice_written_are_noticed()
    {
        using var folder = new TemporaryFolder();
        using (var missing = new MatrixFileWriter(folder.File("a.h5"), false, StageSamples.Provenance, 3, 2))
        {
            missing.WriteRows(0, new Complex64[4]);
            Assert.Throws<InvalidOperationException>(() => missing.Complete(StageSamples.MatrixFacts(3, 2)));
        }

        using (var twice = new MatrixFileWriter(folder.File("b.h5"), false, StageSamples.Provenance, 3, 2))
        {
            twice.WriteRows(0, new Complex64[6]);
            twice.WriteRows(2, new Complex64[2]);
            Assert.Throws<InvalidOperationException>(() => twice.Complete(StageSamples.MatrixFacts(3, 2)));
        }

        Assert.Empty(folder.FileNames);
    }

    [Fact]
    public void A_run_that_is_killed_leaves_no_final_name_and_nothing_that_opens()
    {
        // What a killed process leaves is what stands on the disk in the middle of writing.
        using var folder = new TemporaryFolder();
        string path = folder.File("t.h5");
        string left = folder.File("left.h5");
        using (var writer = new MatrixFileWriter(path, false, StageSamples.Provenance, 3, 2))
        {
            StageSamples.WriteRows(writer, 3, 2);
            Assert.False(File.Exists(path));
            File.Copy(path + AtomicOutput.TemporarySuffix, left);
        }

        Assert.Throws<BadInputException>(() => StageFile.Describe(left));
        File.Move(left, path + AtomicOutput.TemporarySuffix);
        StageSamples.WriteMatrix(path, 3, 2);
        Assert.Equal(["t.h5"], folder.FileNames);
    }

    [Fact]
    public void A_disk_without_room_for_the_frames_is_noticed_at_the_start()
    {
        using var disk = SmallDisk.Mount(1 << 20);
        OutputException failure = Assert.Throws<OutputException>(
            () => new MeasurementFileWriter(disk.File("m.h5"), false, StageSamples.Provenance, 100, new ImageSize(100, 100)));
        Assert.Equal((OutputFailure.DiskFull, disk.File("m.h5")), (failure.Failure, failure.File));
        Assert.Empty(Directory.GetFileSystemEntries(disk.Path));
    }

    [Fact]
    public void A_disk_that_fills_up_at_the_end_leaves_nothing()
    {
        // Room for the elements (1,040,000 of 1,048,576 bytes) but not for the facts of 65,000 pixels.
        using var disk = SmallDisk.Mount(1 << 20);
        const int rows = 65_000;
        using (var writer = new MatrixFileWriter(disk.File("t.h5"), false, StageSamples.Provenance, rows, 2))
        {
            writer.WriteRows(0, new Complex64[rows * 2]);
            OutputException failure = Assert.Throws<OutputException>(() => writer.Complete(StageSamples.MatrixFacts(rows, 2)));
            Assert.Equal(OutputFailure.DiskFull, failure.Failure);
        }

        Assert.Empty(Directory.GetFileSystemEntries(disk.Path));
    }

    private static void FailWhileWriting(string path)
    {
        using var writer = new MatrixFileWriter(path, false, StageSamples.Provenance, 3, 2);
        writer.WriteRows(0, new Complex64[2]);
        throw new NumericalException("no convergence", "use other settings");
    }
}
