using System.Numerics;
using TmLab.Channels;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Storage.StageFiles;

namespace TmLab.Storage.Tests.StageFiles;

/// <summary>Small stage files with every field set to something that can be told from its neighbours.</summary>
internal static class StageSamples
{
    public static StageProvenance Provenance { get; } = new(
        [new StageParent("frames α.tif", new string('a', 64)), new StageParent("schedule.csv", new string('b', 64))],
        """{"tile": 3, "note": "µ"}""",
        "0.1.0+test",
        new DateTimeOffset(2024, 2, 29, 12, 34, 56, 789, TimeSpan.FromHours(2)));

    public static ushort Count(int frame, int pixel) => (ushort)((frame * 7919) + (pixel * 31) + 5);

    public static Complex64 Element(int row, int column) => new((row * 1000) + column + 0.5f, -column - (row / 7f));

    public static MeasurementFacts MeasurementFacts(int frames, ImageSize size, bool full = true) => new(
        new MeasurementManifest(
            full ? "an invented sample, \"quoted\" — µm" : null,
            full ? 632.8 : null,
            new CameraDescription(full ? size : null, 12, full ? 5.5 : null, full ? 0.46 : null, full ? 2.1 : null),
            new FrameLocation(
                full ? FrameStorageKind.Raw : FrameStorageKind.Tiff,
                full ? ["a.raw", "b.raw"] : ["f.tif"],
                full ? "/entry/frames" : null,
                full ? RawPixelFormat.UInt16BigEndian : null,
                full ? 5_000_000_000 : 0),
            new ScheduleLocation(full ? null : "s.csv", full ? ScheduleOrder.StepMajor : null, full ? 4 : 0),
            new ModeDescription(
                full ? BasisKind.Custom : BasisKind.HadamardBinary,
                full ? HadamardOrdering.Natural : HadamardOrdering.Sequency,
                full ? 3 : 2,
                new GridShape(1, 2),
                full ? "p.npy" : null,
                full ? "/p" : null),
            full ? Panel : null,
            full ? SteppedArm.Reference : SteppedArm.Signal,
            full ? 1.0 / 3 : null,
            full ? "line 1\nline 2" : null),
        size,
        new Schedule(
            [.. Enumerable.Range(0, frames).Select(f => new ScheduledFrame(
                f, (FrameRole)(f % 5), f % 5 < 2 ? f : -1, f % 5 < 2 ? f % 4 : -1, f % 5 < 2 ? f * 0.1 : double.NaN, f * 0.013))],
            timesAreMeasured: full),
        [.. Enumerable.Range(0, frames).Select(f => new FrameFacts(f + (1f / 3), f / 1e5f, 0xFFFF_0000u + (uint)f))],
        [.. Enumerable.Range(0, size.PixelCount).Select(p => p / 3f)],
        full ? [.. Enumerable.Range(0, 6).Select(k => new Complex(k / 3.0, -k))] : [],
        full ? Lut : null,
        full ? [1, 2, 255] : []);

    public static TransmissionMatrixFacts MatrixFacts(int rows, int columns, bool full = true) => new(
        full ? "an invented sample" : null,
        full ? 532 : null,
        new ImageSize(rows, 1),
        new GridShape(1, columns),
        full ? Panel : null,
        full ? Lut : null,
        full ? [9, 8, 7] : [],
        new PixelFacts(
            [.. Enumerable.Range(0, rows)],
            [.. Enumerable.Range(1, rows)],
            [.. Enumerable.Range(0, rows).Select(p => p % 3 != 1)],
            [.. Enumerable.Range(0, rows).Select(p => p / 7f)],
            [.. Enumerable.Range(0, rows).Select(p => p == 0 ? float.NaN : p / 9f)]),
        new ModeFacts([.. Enumerable.Range(0, columns).Select(n => n % 2 == 0)], [.. Enumerable.Range(0, columns).Select(n => n / 11f)]),
        new DriftFacts(
            full ? DriftMethod.TrackersInterpolated : DriftMethod.None,
            full ? [0.1, 0.2] : [],
            full ? [0, -1.5] : [],
            full ? [1, 0.97] : [],
            full ? [0.01, 0.02, 0.03] : [],
            full ? [0.001, double.NaN, 0.003] : [],
            full ? [0, -0.04] : [],
            full ? [1, 0.99, 1.01] : [],
            full ? 0.25 : double.NaN),
        new MatrixQuality(0.7, full ? 12.5 : double.NaN, rows, columns, full, full ? ["a warning: ±", ""] : []));

    public static ChannelFacts ChannelFacts(int pixels, int modes, int channels, bool full = true) => new(
        full ? "an invented sample" : null,
        full ? 1550 : null,
        new ImageSize(pixels, 2),
        new GridShape(modes, 3),
        [.. Enumerable.Range(5, pixels)],
        [.. Enumerable.Range(6, pixels)],
        [.. Enumerable.Range(7, modes)],
        [.. Enumerable.Range(0, Math.Min(pixels, modes)).Select(k => 10.0 / (k + 3))],
        channels,
        3.25,
        new MarchenkoPasturComparison(0.5, 0.0858, 2.914, full ? [0.25, 0.75] : [], full ? [0.4, 1.4] : [], full ? [0.41, 1.39] : [], 0.03, full),
        "Gram matrix and Hermitian eigenvectors",
        "managed",
        channels == 0 ? double.NaN : 1e-6,
        full ? ["first", "second"] : []);

    public static void WriteMeasurement(string path, int frames, ImageSize size, bool full = true, bool overwrite = false)
    {
        using var writer = new MeasurementFileWriter(path, overwrite, Provenance, frames, size);
        ushort[] counts = new ushort[size.PixelCount];
        for (int f = 0; f < frames; f++)
        {
            for (int p = 0; p < counts.Length; p++)
            {
                counts[p] = Count(f, p);
            }

            writer.WriteFrame(f, counts);
        }

        writer.Complete(MeasurementFacts(frames, size, full));
    }

    public static void WriteMatrix(string path, int rows, int columns, bool full = true, bool overwrite = false)
    {
        using var writer = new MatrixFileWriter(path, overwrite, Provenance, rows, columns);
        WriteRows(writer, rows, columns);
        writer.Complete(MatrixFacts(rows, columns, full));
    }

    public static void WriteChannels(string path, int pixels, int modes, int channels, bool full = true)
    {
        using var writer = new ChannelFileWriter(path, false, Provenance, pixels, modes, channels);
        if (channels > 0)
        {
            WriteRows(writer.InputModes, modes, channels);
            WriteRows(writer.OutputModes, pixels, channels);
        }

        writer.Complete(ChannelFacts(pixels, modes, channels, full));
    }

    public static void WriteRows(IRowBlockWriter writer, int rows, int columns)
    {
        var row = new Complex64[columns];
        for (int p = rows - 1; p >= 0; p--)
        {
            for (int n = 0; n < columns; n++)
            {
                row[n] = Element(p, n);
            }

            writer.WriteRows(p, row);
        }
    }

    private static ModulatorDescription Panel => new(
        ModulatorKind.Amplitude, new ImageSize(1920, 1080), new PixelRectangle(3, 4, 5, 6), 8.0 / 3, "lut.csv", "flat.png");

    private static GrayPhaseTable Lut => new([0, 7, 255], [0, 0.1, 6.5]);
}
