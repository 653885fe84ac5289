using System.Collections.Immutable;
using TmLab.Cli.Output;
using TmLab.Cli.Stages;
using TmLab.Quantities;

namespace TmLab.Cli.Reports;

/// <summary>The mask that was written, and what it should do.</summary>
internal sealed record MaskReport(
    string Input,
    string Output,
    string Description,
    ImmutableArray<FocusSection> Targets,
    double PredictedEnhancement,
    double IdealEnhancement,
    double ElapsedS) : Report
{
    protected override string Subject => "mask";

    public static MaskReport From(string input, MaskOutcome outcome, double elapsedS) => new(
        input,
        outcome.ImageFile,
        outcome.DescriptionFile,
        [.. outcome.Targets.Zip(outcome.TargetEnhancements, FocusSection.From)],
        outcome.PredictedEnhancement,
        outcome.IdealEnhancement,
        elapsedS)
    {
        Warnings = outcome.Warnings,
    };

    public override void WriteText(TextReport text)
    {
        text.Heading($"Mask from {Input} in {Output}");
        foreach (FocusSection target in Targets)
        {
            text.Row($"target {target.X},{target.Y}", $"predicted enhancement {TextReport.Figure(target.PredictedEnhancement)}");
        }

        text.Row("all targets", $"predicted {TextReport.Figure(PredictedEnhancement)}, ideal for one target {TextReport.Figure(IdealEnhancement)} = 1 + (π/4)(N − 1)");
        text.Row("described in", Description);
    }
}

/// <summary>One target of a mask.</summary>
internal sealed record FocusSection(int X, int Y, double PredictedEnhancement)
{
    public static FocusSection From(CameraPixel pixel, double enhancement) => new(pixel.X, pixel.Y, enhancement);
}
