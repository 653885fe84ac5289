using TmLab.Failures;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.StageFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.StageFiles;

public sealed class DamagedFileTests
{
    private const int SealTailBytes = 24;

    [Fact]
    public void A_file_cut_off_anywhere_is_bad_input()
    {
        using var folder = new TemporaryFolder();
        StageSamples.WriteMeasurement(folder.File("m.h5"), 4, new ImageSize(5, 3));
        byte[] whole = File.ReadAllBytes(folder.File("m.h5"));
        string cut = folder.File("cut.h5");

        for (int length = 0; length < whole.Length - SealTailBytes - 16; length += length < 600 ? 7 : 97)
        {
            File.WriteAllBytes(cut, whole[..length]);
            BadInputException failure = Assert.Throws<BadInputException>(() => ReadAll(cut));
            Assert.Equal(cut, failure.Problems[0].File);
        }

        // Without the last byte of the seal the file is what another program would have written: still whole.
        File.WriteAllBytes(cut, whole[..^1]);
        ReadAll(cut);
    }

    [Fact]
    public void A_flipped_byte_of_the_headers_is_bad_input()
    {
        using var folder = new TemporaryFolder();
        var size = new ImageSize(5, 3);
        StageSamples.WriteMeasurement(folder.File("m.h5"), 4, size);
        byte[] whole = File.ReadAllBytes(folder.File("m.h5"));
        string damaged = folder.File("damaged.h5");
        int dataEnd = 48 + (4 * size.PixelCount * 2);
        int magic = whole.Length - 8;
        for (int at = 0; at < magic; at = at == 47 ? dataEnd : at + (at < 48 ? 1 : 29))
        {
            byte[] copy = [.. whole];
            copy[at] ^= 0x41;
            File.WriteAllBytes(damaged, copy);
            Assert.Throws<BadInputException>(() => ReadAll(damaged));
        }
    }

    [Fact]
    public void A_flipped_byte_in_an_unsealed_file_is_bad_input_or_harmless_never_an_untyped_failure()
    {
        // A file without the seal, as another program leaves it: the HDF5 library meets the damage itself.
        using var folder = new TemporaryFolder();
        StageSamples.WriteMatrix(folder.File("t.h5"), 4, 3);
        byte[] whole = File.ReadAllBytes(folder.File("t.h5"));
        byte[] unsealed = whole[..^1];
        string damaged = folder.File("damaged.h5");
        int refused = 0;
        for (int at = 0; at < unsealed.Length; at += 101)
        {
            byte[] copy = [.. unsealed];
            copy[at] ^= 0x81;
            File.WriteAllBytes(damaged, copy);
            try
            {
                using var reader = new MatrixFileReader(damaged);
                reader.ReadRows(0, 1, new Complex64[reader.ColumnCount]);
                _ = reader.Facts;
                reader.Verify(null, TestContext.Current.CancellationToken);
                _ = StageFile.Describe(damaged);
            }
            catch (BadInputException)
            {
                refused++;
            }
            catch (ArgumentException)
            {
                Assert.Fail($"A wrong call was reported for a damaged byte {at}.");
            }
        }

        Assert.True(refused > 0);
    }

    [Fact]
    public void A_flipped_byte_of_the_data_is_found_by_verifying()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("t.h5");
        const int rows = 600;
        const int columns = 500;
        StageSamples.WriteMatrix(path, rows, columns);
        byte[] whole = File.ReadAllBytes(path);
        foreach (int at in new[] { 48, 48 + (1 << 20), 48 + (rows * columns * 8) - 1 })
        {
            byte[] copy = [.. whole];
            copy[at] ^= 1;
            File.WriteAllBytes(path, copy);
            using var reader = new MatrixFileReader(path);
            BadInputException failure = Assert.Throws<BadInputException>(() => reader.Verify(null, TestContext.Current.CancellationToken));
            Assert.Equal((path, "/matrix"), (failure.Problems[0].File, failure.Problems[0].Place));
        }
    }

    [Fact]
    public void A_file_that_shrinks_while_open_is_bad_input()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("t.h5");
        StageSamples.WriteMatrix(path, 100, 10);
        using var reader = new MatrixFileReader(path);
        using (var file = new FileStream(path, FileMode.Open, FileAccess.Write, FileShare.ReadWrite))
        {
            file.SetLength(1000);
        }

        BadInputException failure = Assert.Throws<BadInputException>(() => reader.ReadRows(50, 50, new Complex64[500]));
        Assert.Equal("/matrix", failure.Problems[0].Place);
    }

    [Theory]
    [InlineData("")]
    [InlineData("P6 not at all")]
    public void Other_files_are_named_as_such(string content)
    {
        using var folder = new TemporaryFolder();
        File.WriteAllText(folder.File("x.h5"), content);
        BadInputException failure = Assert.Throws<BadInputException>(() => StageFile.Describe(folder.File("x.h5")));
        Assert.Contains(content.Length == 0 ? "is empty" : "is not an HDF5 file", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Missing_files_folders_and_other_kinds_are_named_as_such()
    {
        using var folder = new TemporaryFolder();
        StageSamples.WriteMatrix(folder.File("t.h5"), 2, 2);
        Assert.Contains(
            "does not exist",
            Assert.Throws<BadInputException>(() => new MatrixFileReader(folder.File("missing.h5"))).Message,
            StringComparison.Ordinal);
        Assert.Contains(
            "is a folder", Assert.Throws<BadInputException>(() => new MatrixFileReader(folder.Path)).Message, StringComparison.Ordinal);
        Assert.Contains(
            "holds a transmission matrix, not a measurement",
            Assert.Throws<BadInputException>(() => new MeasurementFileReader(folder.File("t.h5"))).Message,
            StringComparison.Ordinal);
    }

    private static void ReadAll(string path)
    {
        using var reader = new MeasurementFileReader(path);
        reader.Read(0, reader.FrameCount, 0, reader.FrameSize.PixelCount, new ushort[reader.FrameCount * reader.FrameSize.PixelCount]);
        _ = reader.Facts;
        _ = reader.Provenance;
    }
}
