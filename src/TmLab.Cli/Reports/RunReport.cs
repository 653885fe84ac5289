using TmLab.Cli.Output;

namespace TmLab.Cli.Reports;

/// <summary>All stages of one run.</summary>
internal sealed record RunReport(
    string OutputFolder, IngestReport Ingest, ReconstructReport Reconstruct, ChannelsReport Channels, MaskReport? Mask, double ElapsedS) : Report
{
    protected override string Subject => "run";

    public override IEnumerable<string> AllWarnings => Stages.SelectMany(s => s.AllWarnings).Concat(Warnings);

    private IEnumerable<Report> Stages => new Report?[] { Ingest, Reconstruct, Channels, Mask }.OfType<Report>();

    public override void WriteText(TextReport text)
    {
        foreach (Report stage in Stages)
        {
            stage.WriteText(text);
            text.Blank();
        }

        text.Line($"Done in {Duration.Describe(TimeSpan.FromSeconds(ElapsedS))}; the files are in {OutputFolder}");
    }
}
