using TmLab.Cli.Output;
using TmLab.Measurement;

namespace TmLab.Cli.Reports;

/// <summary>What was taken in.</summary>
internal sealed record IngestReport(
    string Folder,
    string Output,
    string? Title,
    int FrameCount,
    int FrameWidth,
    int FrameHeight,
    int BitDepth,
    BasisKind Basis,
    int PatternCount,
    int GridRows,
    int GridColumns,
    int TrackerCount,
    int DarkFrameCount,
    int ReferenceFrameCount,
    int BlankFrameCount,
    double MeanCount,
    double LargestSaturatedFraction,
    double DurationS,
    double ElapsedS) : Report
{
    protected override string Subject => "ingest";

    public static IngestReport From(string folder, string output, MeasurementFacts facts, double elapsedS) => new(
        folder,
        output,
        facts.Manifest.Title,
        facts.Schedule.Frames.Length,
        facts.FrameSize.Width,
        facts.FrameSize.Height,
        facts.Manifest.Camera.BitDepth,
        facts.Manifest.Modes.Basis,
        facts.Manifest.Modes.PatternCount,
        facts.Manifest.Modes.Grid.Rows,
        facts.Manifest.Modes.Grid.Columns,
        facts.Schedule.Trackers.Count(),
        facts.Schedule.FramesWith(FrameRole.Dark).Length,
        facts.Schedule.FramesWith(FrameRole.Reference).Length,
        facts.Schedule.FramesWith(FrameRole.Blank).Length,
        facts.FrameFacts.Average(f => f.MeanCount),
        facts.FrameFacts.Max(f => f.SaturatedFraction),
        facts.Schedule.TimesAreMeasured ? facts.Schedule.Frames[^1].TimeS - facts.Schedule.Frames[0].TimeS : double.NaN,
        elapsedS);

    public override void WriteText(TextReport text)
    {
        text.Heading($"Ingested {Folder} into {Output}");
        if (Title is not null)
        {
            text.Row("title", Title);
        }

        text.Row("frames", $"{TextReport.Count(FrameCount)} of {FrameWidth} × {FrameHeight} pixels, {BitDepth} bit");
        text.Row("patterns", $"{TextReport.Count(PatternCount)} {Basis} on {GridRows} × {GridColumns} macro-pixels");
        text.Row("trackers", TextReport.Count(TrackerCount));
        text.Row("other frames", $"{DarkFrameCount} dark, {ReferenceFrameCount} reference, {BlankFrameCount} blank");
        text.Row("mean", MeanCount, "counts");
        text.Row("saturated", $"{TextReport.Figure(100 * LargestSaturatedFraction)} % of the brightest frame");
        text.Row("recorded over", DurationS, "s");
    }
}
