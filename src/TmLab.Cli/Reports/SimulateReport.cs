using TmLab.Cli.Output;
using TmLab.Cli.Stages;
using TmLab.Measurement;

namespace TmLab.Cli.Reports;

/// <summary>What was simulated.</summary>
internal sealed record SimulateReport(
    string Input,
    string Output,
    string? Title,
    FrameStorageKind Frames,
    int FrameCount,
    int FrameWidth,
    int FrameHeight,
    string Medium,
    double MeanSignalElectrons,
    double ReferenceRatio,
    double GrainPixels,
    double DriftRangeRad,
    double DecorrelationTimeS,
    int FaultCount,
    ulong Seed,
    double ElapsedS) : Report
{
    protected override string Subject => "simulate";

    public static SimulateReport From(SimulateRequest request, SimulateOutcome outcome, double elapsedS) => new(
        request.Input,
        request.Output,
        outcome.Manifest.Title,
        outcome.Manifest.Frames.Kind,
        outcome.FrameCount,
        outcome.FrameSize.Width,
        outcome.FrameSize.Height,
        outcome.Medium,
        outcome.Bench.MeanSignalElectrons,
        outcome.Bench.Reference.IntensityRatio,
        outcome.Bench.Grain.WidthPixels,
        outcome.DriftRangeRad,
        outcome.Bench.DecorrelationTimeS,
        outcome.Bench.Faults.Length,
        outcome.Bench.Seed,
        elapsedS);

    public override void WriteText(TextReport text)
    {
        text.Heading($"Simulated {Input} in {Output}");
        text.Row("frames", $"{TextReport.Count(FrameCount)} of {FrameWidth} × {FrameHeight} pixels ({Frames})");
        text.Row("medium", Medium);
        text.Row("signal", MeanSignalElectrons, "photoelectrons a pixel a frame");
        text.Row("reference", ReferenceRatio, "times the signal");
        text.Row("grain", GrainPixels, "pixels");
        text.Row("true drift", DriftRangeRad, "rad from lowest to highest");
        text.Row("decorrelation time", double.IsFinite(DecorrelationTimeS) ? TextReport.Figure(DecorrelationTimeS, "s") : "none, a sample at rest");
        text.Row("faults", TextReport.Count(FaultCount));
        text.Row("seed", TextReport.Count((long)Seed));
    }
}
