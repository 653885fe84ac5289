using System.Collections.Immutable;
using TmLab.Channels;
using TmLab.Cli.Output;

namespace TmLab.Cli.Reports;

/// <summary>The spectrum beside the law for its shape.</summary>
internal sealed record ChannelsReport(
    string Input,
    string Output,
    int PixelCount,
    int ModeCount,
    int SingularValueCount,
    int StoredChannelCount,
    double LargestNormalisedSingularValue,
    double ParticipationNumber,
    MarchenkoPasturSection? MarchenkoPastur,
    string Method,
    string Engine,
    double DiagonalError,
    double ElapsedS) : Report
{
    protected override string Subject => "channels";

    public static ChannelsReport From(string input, string output, ChannelFacts facts, double elapsedS) => new(
        input,
        output,
        facts.Y.Length,
        facts.Mode.Length,
        facts.SingularValues.Length,
        facts.ChannelCount,
        facts.NormalisedSingularValues.DefaultIfEmpty(double.NaN).First(),
        facts.ParticipationNumber,
        facts.MarchenkoPastur is null ? null : MarchenkoPasturSection.From(facts.MarchenkoPastur),
        facts.Method,
        facts.Engine,
        facts.DiagonalError,
        elapsedS)
    {
        Warnings = facts.Warnings,
    };

    public override void WriteText(TextReport text)
    {
        text.Heading($"Channels of {Input} in {Output}");
        text.Row("decomposed", $"{TextReport.Count(PixelCount)} pixels × {TextReport.Count(ModeCount)} modes");
        text.Row("channels", $"{TextReport.Count(SingularValueCount)} singular values, {TextReport.Count(StoredChannelCount)} with vectors");
        text.Row("largest", $"{TextReport.Figure(LargestNormalisedSingularValue)} times the r.m.s. singular value");
        text.Row("participation number", ParticipationNumber);
        MarchenkoPastur?.WriteText(text);
        text.Row("method", Method);
        text.Row("engine", Engine);
        text.Row("error of U†TV − Σ", DiagonalError, "of the largest singular value");
    }
}

/// <summary>A spectrum beside the Marchenko–Pastur law of the same shape.</summary>
internal sealed record MarchenkoPasturSection(
    double AspectRatio,
    double LowerEdge,
    double UpperEdge,
    double Distance,
    bool IsCompatible,
    ImmutableArray<double> Probability,
    ImmutableArray<double> PredictedQuantile,
    ImmutableArray<double> MeasuredQuantile)
{
    public static MarchenkoPasturSection From(MarchenkoPasturComparison c) => new(
        c.AspectRatio, c.LowerEdge, c.UpperEdge, c.Distance, c.IsCompatible, c.Probability, c.PredictedQuantile, c.MeasuredQuantile);

    public void WriteText(TextReport text)
    {
        text.Row("Marchenko–Pastur", $"aspect ratio {TextReport.Figure(AspectRatio)}, edges {TextReport.Figure(LowerEdge)} and {TextReport.Figure(UpperEdge)}");
        text.Row("distance from it", $"{TextReport.Figure(Distance)} (largest difference of the distributions): "
            + (IsCompatible ? "as for independent elements" : "more than independent elements give"));
        for (int k = 0; k < Probability.Length; k++)
        {
            text.Row(
                $"  quantile {TextReport.Figure(Probability[k])}",
                $"measured {TextReport.Figure(MeasuredQuantile[k])}, predicted {TextReport.Figure(PredictedQuantile[k])}");
        }
    }
}
