using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.StageFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Stage files beside the reference implementation of HDF5 (The HDF Group's library through h5py and its tools): what we write it
/// reads, what it writes we read.
/// </summary>
public sealed class StageFilesTests
{
    private const int Rows = 37;
    private const int Columns = 13;

    private const string RewriteScript = """
        import sys, h5py, numpy as np
        source, target, dtype, chunks, gzip = sys.argv[1:]
        with h5py.File(source) as a, h5py.File(target, 'w') as b:
            for key, value in a.attrs.items():
                b.attrs[key] = value
            for name in a:
                if name != 'matrix':
                    a.copy(name, b)
            options = {}
            if chunks: options['chunks'] = tuple(map(int, chunks.split('x')))
            if gzip: options['compression'] = 'gzip'
            values = a['matrix'][:]
            names = dtype.split(',')
            stored = np.empty(values.shape, np.dtype({'names': names[:2], 'formats': [names[2]] * 2}))
            for name in names[:2]:
                stored[name] = values.real if name.startswith('r') else values.imag
            b.create_dataset('matrix', data=stored, **options)
        """;

    [Fact]
    public void A_matrix_opens_in_h5py_as_complex64_with_equal_values()
    {
        var python = OutsidePeer.Python();
        using var folder = new TemporaryFolder();
        WriteMatrix(folder.File("t.h5"));
        string output = python.RunScript(
            """
            import sys, h5py, numpy as np
            f = h5py.File(sys.argv[1])
            t = f['matrix']
            p, n = np.meshgrid(np.arange(37), np.arange(13), indexing='ij')
            expected = ((p * 100 + n + 0.25) - 1j * (n + 0.5)).astype(np.complex64)
            print(t.dtype, t.shape, t.chunks, np.array_equal(t[:], expected), t.attrs['units'])
            print(f.attrs['format'], f.attrs['format_version'], list(f.attrs['parent_sha256']) == ['0' * 64], f.attrs['settings'])
            print(f['pixels/valid'][:].astype(bool).sum(), f['pixels/y'][36], f['geometry'].attrs['grid_columns'])
            def check(name, o):
                assert not isinstance(o, h5py.Dataset) or 'units' in o.attrs, name
            f.visititems(check)
            """,
            folder.File("t.h5"));
        Assert.Equal(
            """
            complex64 (37, 13) None True sqrt(count)
            tmlab-matrix 1 True {"tile": 4}
            19 36 13

            """,
            output,
            ignoreLineEndingDifferences: true);
    }

    [Fact]
    public void Frames_open_in_h5py_as_uint16_with_equal_values_and_checksums()
    {
        var python = OutsidePeer.Python();
        using var folder = new TemporaryFolder();
        WriteMeasurement(folder.File("m.h5"), 5, new ImageSize(7, 3));
        string output = python.RunScript(
            """
            import sys, h5py, json, zlib, numpy as np
            f = h5py.File(sys.argv[1])
            c = f['frames/counts']
            print(c.dtype, c.shape, np.array_equal(c[:].ravel(), (np.arange(105) * 613 % 65536).astype('u2')))
            checks = f['checksums/frames/counts']
            print(checks.attrs['block_bytes'], int(checks[0]) == zlib.crc32(c[:].tobytes()))
            print(list(f['frames/role'][:]), f['frames/role'].attrs['meaning'])
            print(json.loads(f.attrs['manifest'])['camera']['bit_depth'], f['camera/dark'].shape)
            """,
            folder.File("m.h5"));
        Assert.Equal(
            """
            uint16 (5, 3, 7) True
            1048576 True
            [0, 0, 0, 0, 2] 0 mode, 1 tracker, 2 dark, 3 reference, 4 blank
            12 (3, 7)

            """,
            output,
            ignoreLineEndingDifferences: true);
    }

    [Fact]
    public void H5dump_shows_the_matrix_as_contiguous_single_precision_pairs()
    {
        var dump = OutsidePeer.H5Dump();
        using var folder = new TemporaryFolder();
        WriteMatrix(folder.File("t.h5"));
        string header = dump.Run("-p", "-H", "-d", "/matrix", folder.File("t.h5"));
        Assert.Matches("""H5T_IEEE_F32LE "r";\s+H5T_IEEE_F32LE "i";""", header);
        Assert.Matches($@"DATASPACE\s+SIMPLE \{{ \( {Rows}, {Columns} \)", header);
        Assert.Matches($@"CONTIGUOUS\s+SIZE {Rows * Columns * 8}\s", header);
        Assert.Contains("HDF5 \"", dump.Run(folder.File("t.h5")), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("r,i,<f4", "", "")]
    [InlineData("r,i,<f4", "5x4", "gzip")]
    [InlineData("r,i,<f4", "37x13", "")]
    [InlineData("re,im,<f4", "", "")]
    [InlineData("imag,real,<f4", "", "")]
    [InlineData("i,r,<f4", "8x8", "gzip")]
    public void A_matrix_written_by_h5py_is_read(string dtype, string chunks, string gzip)
    {
        var python = OutsidePeer.Python();
        using var folder = new TemporaryFolder();
        WriteMatrix(folder.File("t.h5"));
        python.RunScript(RewriteScript, folder.File("t.h5"), folder.File("other.h5"), dtype, chunks, gzip);
        RequireMatrix(folder.File("other.h5"));
    }

    [Theory]
    [InlineData("r,i,>f4", "most significant byte first")]
    [InlineData("r,i,<f8", "holds complex128, needed complex64")]
    [InlineData("rho,imag,<f4", "needed complex64")]
    public void A_matrix_of_another_type_is_refused(string dtype, string message)
    {
        var python = OutsidePeer.Python();
        using var folder = new TemporaryFolder();
        WriteMatrix(folder.File("t.h5"));
        python.RunScript(RewriteScript, folder.File("t.h5"), folder.File("other.h5"), dtype, "", "");
        BadInputException failure = Assert.Throws<BadInputException>(() => new MatrixFileReader(folder.File("other.h5")));
        Assert.Equal("/matrix", failure.Problems[0].Place);
        Assert.Contains(message, failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Frames_rewritten_in_compressed_chunks_are_read_over_any_run_of_pixels()
    {
        var python = OutsidePeer.Python();
        using var folder = new TemporaryFolder();
        WriteMeasurement(folder.File("m.h5"), 5, new ImageSize(7, 3));
        python.RunScript(
            """
            import sys, h5py
            with h5py.File(sys.argv[1]) as a, h5py.File(sys.argv[2], 'w') as b:
                for k, v in a.attrs.items(): b.attrs[k] = v
                for n in a: a.copy(n, b)
                c = b['frames/counts'][:]
                del b['frames/counts']
                d = b.create_dataset('frames/counts', data=c, chunks=(2, 2, 4), compression='gzip', shuffle=True)
                d.attrs['units'] = 'count'
            """,
            folder.File("m.h5"),
            folder.File("other.h5"));
        using var reader = new MeasurementFileReader(folder.File("other.h5"));
        for (int first = 0; first < 21; first++)
        {
            for (int count = 1; count <= 21 - first; count++)
            {
                ushort[] found = new ushort[4 * count];
                reader.Read(1, 4, first, count, found);
                Assert.Equal(Enumerable.Range(0, 4 * count).Select(k => Count(1 + (k / count), first + (k % count), 21)), found);
            }
        }
    }

    [Theory]
    [InlineData("/matrix:CHUNK=8x8")]
    [InlineData("/matrix:CONTI")]
    public void A_matrix_copied_by_h5repack_is_read(string layout)
    {
        var repack = OutsidePeer.H5Repack();
        using var folder = new TemporaryFolder();
        WriteMatrix(folder.File("t.h5"));
        repack.Run("-l", layout, folder.File("t.h5"), folder.File("copy.h5"));
        RequireMatrix(folder.File("copy.h5"));
        Assert.False(StageFile.Describe(folder.File("copy.h5")).IsSealed);
    }

    private static Complex64 Element(int row, int column) => new((row * 100) + column + 0.25f, -(column + 0.5f));

    private static ushort Count(int frame, int pixel, int pixels) => (ushort)(((frame * pixels) + pixel) * 613 % 65536);

    private static StageProvenance Provenance => new(
        [new StageParent("parent.h5", new string('0', 64))], """{"tile": 4}""", "test", DateTimeOffset.UnixEpoch);

    private static TransmissionMatrixFacts MatrixFacts => new(
        "an invented sample",
        633,
        new ImageSize(1, Rows),
        new GridShape(1, Columns),
        null,
        null,
        [],
        new PixelFacts(
            [.. Enumerable.Range(0, Rows)],
            [.. Enumerable.Repeat(0, Rows)],
            [.. Enumerable.Range(0, Rows).Select(p => p % 2 == 0)],
            [.. Enumerable.Repeat(0.5f, Rows)],
            [.. Enumerable.Repeat(0.1f, Rows)]),
        new ModeFacts([.. Enumerable.Repeat(true, Columns)], [.. Enumerable.Repeat(0.1f, Columns)]),
        DriftFacts.None(0),
        new MatrixQuality(0.5, 10, 19, Columns, false, []));

    private static void WriteMatrix(string path)
    {
        using var writer = new MatrixFileWriter(path, false, Provenance, Rows, Columns);
        for (int p = 0; p < Rows; p++)
        {
            writer.WriteRows(p, [.. Enumerable.Range(0, Columns).Select(n => Element(p, n))]);
        }

        writer.Complete(MatrixFacts);
    }

    private static void RequireMatrix(string path)
    {
        using var reader = new MatrixFileReader(path);
        Assert.Equal((Rows, Columns), (reader.RowCount, reader.ColumnCount));
        var found = new Complex64[Rows * Columns];
        reader.ReadRows(0, Rows, found);
        Assert.Equal(Enumerable.Range(0, Rows * Columns).Select(k => Element(k / Columns, k % Columns)), found);
        var row = new Complex64[Columns];
        reader.ReadRows(20, 1, row);
        Assert.Equal(Element(20, 12), row[12]);
        Assert.Equal(MatrixFacts.Title, reader.Facts.Title);
        Assert.Equal(Rows, reader.Facts.Pixels.Y.Length);
        reader.Verify(null, TestContext.Current.CancellationToken);
    }

    private static void WriteMeasurement(string path, int frames, ImageSize size)
    {
        using var writer = new MeasurementFileWriter(path, false, Provenance, frames, size);
        for (int f = 0; f < frames; f++)
        {
            writer.WriteFrame(f, [.. Enumerable.Range(0, size.PixelCount).Select(p => Count(f, p, size.PixelCount))]);
        }

        var manifest = new MeasurementManifest(
            null,
            null,
            new CameraDescription(null, 12, null, null, null),
            new FrameLocation(FrameStorageKind.Tiff, ["f.tif"], null, null, 0),
            new ScheduleLocation("s.csv", null, 0),
            new ModeDescription(BasisKind.Pixel, HadamardOrdering.Natural, 1, new GridShape(1, 1), null, null),
            null,
            SteppedArm.Signal,
            null,
            null);
        ImmutableArray<ScheduledFrame> schedule = [.. Enumerable.Range(0, frames).Select(f => f == frames - 1
            ? new ScheduledFrame(f, FrameRole.Dark, -1, -1, double.NaN, f)
            : new ScheduledFrame(f, FrameRole.Mode, 0, f, f, f))];
        writer.Complete(new MeasurementFacts(
            manifest,
            size,
            new Schedule(schedule, timesAreMeasured: false),
            [.. Enumerable.Repeat(default(FrameFacts), frames)],
            [.. Enumerable.Repeat(0f, size.PixelCount)],
            [],
            null,
            []));
    }
}
