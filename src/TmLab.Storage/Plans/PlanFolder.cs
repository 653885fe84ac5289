using System.Collections.Immutable;
using System.Text;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Images;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Plans;

/// <summary>
/// A planned measurement as a folder: <c>measurement.json</c> and <c>schedule.csv</c> ready for ingest once the frames are beside them,
/// the panel's images in <c>patterns</c>, <c>display.csv</c> that says which of them each frame shows, <c>plan.json</c>.
/// </summary>
public static class PlanFolder
{
    /// <summary>The folder of the images.</summary>
    public const string ImageFolder = "patterns";

    /// <summary>The table of frames and images.</summary>
    public const string DisplayFile = "display.csv";

    /// <summary>Writes a plan; the folder appears whole or not at all.</summary>
    /// <param name="path">The folder to write.</param>
    /// <param name="overwrite">Whether an earlier measurement folder of that name may be replaced.</param>
    /// <param name="plan">The plan.</param>
    /// <param name="threads">Largest number of threads.</param>
    /// <param name="progress">Is told of images written.</param>
    /// <param name="cancel">Stops between two images.</param>
    /// <returns>Number of images.</returns>
    /// <exception cref="OutputException">The name is taken or cannot be written to, or the disk is full.</exception>
    /// <exception cref="OperationCanceledException">Cancellation was asked for.</exception>
    public static int Write(
        string path, bool overwrite, MeasurementPlan plan, int threads, IProgress<StageProgress>? progress = null, CancellationToken cancel = default)
    {
        using var folder = AtomicFolder.Begin(path, overwrite, ManifestJson.FileName);
        PlanSettings settings = plan.Settings;
        var panel = new PanelPatterns(settings);
        ImmutableArray<PanelImage> images = panel.Images(plan.Schedule);
        OutputFailures.Guard(folder.FinalPath, () =>
        {
            SideFiles.Write(folder, plan.Manifest, plan.Schedule, settings.CustomPatterns, settings.PhaseLut, settings.Flatness);
            SideFiles.WriteText(folder, DisplayFile, Display(plan.Schedule, panel));
            using (FileStream stream = folder.Create(PlanExpectationsJson.FileName))
            {
                PlanExpectationsJson.Write(stream, plan);
            }

            Directory.CreateDirectory(Path.Combine(folder.TemporaryPath, ImageFolder));
            WriteImages(folder, panel, images, threads, progress, cancel);
        });
        folder.Commit();
        return images.Length;
    }

    /// <summary>The name of an image relative to the folder.</summary>
    public static string FileOf(PanelImage image) => $"{ImageFolder}/{image.Name}.png";

    private static void WriteImages(
        AtomicFolder folder, PanelPatterns panel, ImmutableArray<PanelImage> images, int threads, IProgress<StageProgress>? progress, CancellationToken cancel)
    {
        int done = 0;
        var options = new ParallelOptions { MaxDegreeOfParallelism = threads, CancellationToken = cancel };
        Parallel.ForEach(images, options, image =>
        {
            using FileStream stream = folder.Create(FileOf(image));
            ModulatorImageFile.Write(panel.Draw(image), ModulatorImageFormat.Png, stream);
            progress?.Report(new StageProgress("writing images", Interlocked.Increment(ref done), images.Length, "images"));
        });
    }

    private static string Display(Schedule schedule, PanelPatterns panel)
    {
        var text = new StringBuilder("frame,image\n");
        foreach (ScheduledFrame frame in schedule.Frames)
        {
            string image = panel.Shown(frame) is { } shown ? FileOf(shown) : "";
            text.Append(FormattableString.Invariant($"{frame.Index},{image}\n"));
        }

        return text.ToString();
    }
}
