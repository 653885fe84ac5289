using System.Collections.Immutable;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Quantities;

namespace TmLab.Cli.Commands;

/// <summary>All stages in the order of the data, into one folder under fixed names.</summary>
internal static class AllStages
{
    public const string MeasurementName = "measurement.h5";
    public const string MatrixName = "matrix.h5";
    public const string ChannelsName = "channels.h5";
    public const string MaskName = "mask.png";

    public static RunReport Execute(IStages stages, RunRequest request, StageContext context)
    {
        MakeFolder(request.OutputFolder);
        (RunReport report, double elapsedS) = Stopwatch.Time(() => ExecuteStages(stages, request, context));
        return report with { ElapsedS = elapsedS };
    }

    private static RunReport ExecuteStages(IStages stages, RunRequest request, StageContext context)
    {
        string InFolder(string name) => Path.Combine(request.OutputFolder, name);
        IngestReport ingest = IngestCommand.Execute(stages, new IngestRequest(request.Folder, InFolder(MeasurementName)), context);

        var reconstruct = new ReconstructRequest(ingest.Output, InFolder(MatrixName));
        (TransmissionMatrixFacts facts, double elapsedS) = Stopwatch.Time(() => stages.Reconstruct(reconstruct, context));
        var matrix = ReconstructReport.From(reconstruct.Input, reconstruct.Output, facts, elapsedS);

        ChannelsReport channels = ChannelsCommand.Execute(stages, new ChannelsRequest(matrix.Output, InFolder(ChannelsName)), context);
        if (facts.Modulator is null)
        {
            return new RunReport(request.OutputFolder, ingest, matrix, channels, Mask: null, ElapsedS: 0)
            {
                Warnings = ["No mask was made, since the measurement does not describe the modulator."],
            };
        }

        ImmutableArray<CameraPixel> targets = request.Targets.IsEmpty ? [CentralPixel(facts)] : request.Targets;
        MaskReport mask = MaskCommand.Execute(stages, new MaskRequest(matrix.Output, targets, InFolder(MaskName)), context);
        return new RunReport(request.OutputFolder, ingest, matrix, channels, mask, ElapsedS: 0);
    }

    /// <summary>The valid pixel nearest to the centre of the camera region; the first of equals in row-major order.</summary>
    private static CameraPixel CentralPixel(TransmissionMatrixFacts facts)
    {
        PixelFacts pixels = facts.Pixels;
        double DistanceSquared(int p) =>
            Math.Pow(pixels.X[p] - ((facts.CameraRegion.Width - 1) / 2.0), 2) + Math.Pow(pixels.Y[p] - ((facts.CameraRegion.Height - 1) / 2.0), 2);
        int[] valid = [.. Enumerable.Range(0, pixels.X.Length).Where(p => pixels.Valid[p])];
        if (valid.Length == 0)
        {
            throw new NumericalException("no pixel of the matrix is valid, so there is nothing to focus on", "look at the frames with 'show'");
        }

        int nearest = valid.MinBy(DistanceSquared);
        return new CameraPixel(pixels.X[nearest], pixels.Y[nearest]);
    }

    private static void MakeFolder(string folder)
    {
        try
        {
            Directory.CreateDirectory(folder);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new OutputException(folder, OutputFailure.NotWritable, "name a folder that you may write to", e);
        }
    }
}
