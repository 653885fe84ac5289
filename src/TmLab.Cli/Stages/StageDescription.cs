using System.Collections.Immutable;
using System.Globalization;
using TmLab.Channels;
using TmLab.Cli.Output;
using TmLab.Cli.Reports;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Storage.StageFiles;

namespace TmLab.Cli.Stages;

/// <summary>What is in a stage file, in words and numbers: what any such file says of itself, then what its kind holds.</summary>
internal static class StageDescription
{
    public static ShowReport Of(string file)
    {
        StageFileDescription description = StageFile.Describe(file);
        StageProvenance provenance = description.Provenance;
        return new ShowReport(
            file,
            description.Format.Name,
            description.FormatVersion,
            provenance.CreatedUtc.ToString("yyyy-MM-dd'T'HH:mm:ss'Z'", CultureInfo.InvariantCulture),
            provenance.ToolVersion,
            provenance.Parents.IsEmpty ? null : provenance.Parents[0].Sha256,
            provenance.SettingsJson,
            Facts(file, description.Format),
            [.. description.Datasets.Select(d => new DatasetSection(d.Path, d.ElementType, d.Shape, d.Units ?? ""))]);
    }

    private static ImmutableArray<FactSection> Facts(string file, StageFormat format)
    {
        if (format == StageFormat.Measurement)
        {
            using var measurement = new MeasurementFileReader(file);
            return [.. OfMeasurement(measurement.Facts)];
        }

        if (format == StageFormat.Matrix)
        {
            using var matrix = new MatrixFileReader(file);
            return [.. OfMatrix(matrix.Facts)];
        }

        using var channels = new ChannelFileReader(file);
        return [.. OfChannels(channels.Facts)];
    }

    private static IEnumerable<FactSection> OfMeasurement(MeasurementFacts facts)
    {
        yield return new FactSection("title", facts.Manifest.Title ?? "none");
        yield return new FactSection("frames", $"{TextReport.Count(facts.Schedule.Frames.Length)} of {facts.FrameSize} pixels");
        yield return new FactSection("patterns", $"{facts.Manifest.Modes.PatternCount} {facts.Manifest.Modes.Basis}, grid {facts.Manifest.Modes.Grid}");
        yield return new FactSection("trackers", TextReport.Count(facts.Schedule.Trackers.Count()));
        yield return new FactSection("mean", TextReport.Figure(facts.FrameFacts.Average(f => f.MeanCount), "counts"));
    }

    private static IEnumerable<FactSection> OfMatrix(TransmissionMatrixFacts facts)
    {
        yield return new FactSection("title", facts.Title ?? "none");
        yield return new FactSection("matrix", $"{TextReport.Count(facts.CameraRegion.PixelCount)} pixels ({facts.CameraRegion}) × {facts.Grid.Count} modes ({facts.Grid})");
        yield return new FactSection("valid", $"{facts.Quality.ValidPixels} pixels, {facts.Quality.ValidModes} modes");
        yield return new FactSection("drift", $"{facts.Drift.Method}, largest step between trackers {TextReport.Figure(facts.Drift.LargestGapRad, "rad")}");
        yield return new FactSection("visibility", TextReport.Figure(facts.Quality.MeanVisibility));
        yield return new FactSection("signal to noise", TextReport.Figure(facts.Quality.SignalToNoise));
    }

    private static IEnumerable<FactSection> OfChannels(ChannelFacts facts)
    {
        yield return new FactSection("title", facts.Title ?? "none");
        yield return new FactSection("decomposed", $"{facts.Y.Length} pixels × {facts.Mode.Length} modes");
        yield return new FactSection("channels", $"{facts.SingularValues.Length} singular values, {facts.ChannelCount} with vectors");
        yield return new FactSection("participation", TextReport.Figure(facts.ParticipationNumber));
        yield return new FactSection("method", facts.Method);
    }
}
