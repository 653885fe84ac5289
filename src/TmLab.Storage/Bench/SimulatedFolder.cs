using System.Globalization;
using System.Text;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Simulation;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Manifest;
using TmLab.Storage.Plans;

namespace TmLab.Storage.Bench;

/// <summary>A simulated measurement as a folder: a measurement folder like a bench's, with the truth beside the frames.</summary>
public static class SimulatedFolder
{
    /// <summary>The true transmission matrix at the first frame, complex64 (pixel, mode), √photoelectrons.</summary>
    public const string TruthMatrixFile = "truth-matrix.npy";

    /// <summary>Drift, step, power, field correlation and scheduled number of each frame in the file.</summary>
    public const string TruthFramesFile = "truth-frames.csv";

    private const string TiffFile = "frames.tif";

    /// <summary>Renders all frames of a bench and writes the folder, which appears whole or not at all.</summary>
    /// <param name="path">The folder to write.</param>
    /// <param name="overwrite">Whether an earlier measurement folder of that name may be replaced.</param>
    /// <param name="measurement">The measurement that the bench simulates.</param>
    /// <param name="bench">The bench.</param>
    /// <param name="storage">How the frames are stored: raw or TIFF.</param>
    /// <param name="threads">Largest number of threads; the bytes do not depend on it.</param>
    /// <param name="progress">Is told of frames written.</param>
    /// <param name="cancel">Stops between two frames.</param>
    /// <returns>The manifest that was written.</returns>
    /// <exception cref="OutputException">The name is taken or cannot be written to, or the disk is full.</exception>
    /// <exception cref="OperationCanceledException">Cancellation was asked for.</exception>
    public static MeasurementManifest Write(
        string path,
        bool overwrite,
        OpenedPlan measurement,
        VirtualBench bench,
        FrameStorageKind storage,
        int threads,
        IProgress<StageProgress>? progress = null,
        CancellationToken cancel = default)
    {
        using var folder = AtomicFolder.Begin(path, overwrite, ManifestJson.FileName);
        MeasurementManifest manifest = ManifestOf(measurement, storage);
        OutputFailures.Guard(folder.FinalPath, () =>
        {
            SideFiles.Write(
                folder, manifest, measurement.Schedule, measurement.CustomPatterns, measurement.PhaseLut, measurement.Flatness);
            WriteFrames(folder, manifest, bench, threads, progress, cancel);
            WriteTruth(folder, bench.Truth);
        });
        folder.Commit();
        return manifest;
    }

    private static MeasurementManifest ManifestOf(OpenedPlan measurement, FrameStorageKind storage)
    {
        MeasurementManifest manifest = SideFiles.Named(measurement.Manifest, measurement.PhaseLut, measurement.Flatness);
        RawPixelFormat pixel = manifest.Camera.BitDepth <= 8 ? RawPixelFormat.UInt8 : RawPixelFormat.UInt16LittleEndian;
        return manifest with
        {
            Title = manifest.Title is null ? "simulated measurement" : $"{manifest.Title} (simulated)",
            Frames = storage == FrameStorageKind.Tiff
                ? new FrameLocation(FrameStorageKind.Tiff, [TiffFile], null, null, 0)
                : new FrameLocation(FrameStorageKind.Raw, [MeasurementPlan.FramesFile], null, pixel, 0),
            Schedule = manifest.Schedule.Path is null ? manifest.Schedule : new ScheduleLocation(MeasurementPlan.ScheduleFile, null, 0),
        };
    }

    private static void WriteFrames(
        AtomicFolder folder, MeasurementManifest manifest, VirtualBench bench, int threads, IProgress<StageProgress>? progress, CancellationToken cancel)
    {
        using IFrameSink sink = manifest.Frames.Kind == FrameStorageKind.Tiff
            ? new TiffStackWriter(Path.Combine(folder.TemporaryPath, TiffFile), bench.FrameSize)
            : new RawStackWriter(folder.Create(MeasurementPlan.FramesFile), manifest.Frames.Pixel!.Value);
        using IFrameSource frames = bench.OpenFrames(threads);
        var counts = new ushort[bench.FrameSize.PixelCount];
        for (int frame = 0; frame < bench.FrameCount; frame++)
        {
            cancel.ThrowIfCancellationRequested();
            frames.ReadNext(counts);
            sink.Write(counts);
            progress?.Report(new StageProgress("simulating frames", frame + 1, bench.FrameCount, "frames"));
        }
    }

    private static void WriteTruth(AtomicFolder folder, BenchTruth truth)
    {
        using (FileStream stream = folder.Create(TruthMatrixFile))
        {
            NpyMatrixWriter.Write(stream, truth.Matrix);
        }

        SideFiles.WriteText(folder, TruthFramesFile, TruthText(truth));
    }

    private static string TruthText(BenchTruth truth)
    {
        var text = new StringBuilder("frame,drift_phase_rad,step_phase_rad,power,field_correlation,source_frame\n");
        for (int frame = 0; frame < truth.Power.Length; frame++)
        {
            string step = double.IsNaN(truth.StepPhaseRad[frame])
                ? "" : truth.StepPhaseRad[frame].ToString("F6", CultureInfo.InvariantCulture);
            text.Append(
                CultureInfo.InvariantCulture,
                $"{frame},{truth.DriftPhaseRad[frame]:F6},{step},{truth.Power[frame]:F6},{truth.FieldCorrelation[frame]:F6},{truth.SourceFrame[frame]}\n");
        }

        return text.ToString();
    }
}
