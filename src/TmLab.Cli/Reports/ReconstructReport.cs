using TmLab.Cli.Output;
using TmLab.Matrix;

namespace TmLab.Cli.Reports;

/// <summary>What the reconstructed matrix is, and how far to trust it.</summary>
internal sealed record ReconstructReport(
    string Input,
    string Output,
    int PixelCount,
    int ModeCount,
    int ValidPixelCount,
    int ValidModeCount,
    DriftMethod DriftMethod,
    int TrackerCount,
    double DriftRangeRad,
    double LargestTrackerGapRad,
    double SmallestTrackerOverlap,
    double WalkRateRad2PerS,
    double LargestStepErrorRad,
    double PowerSpread,
    double MeanVisibility,
    double SignalToNoise,
    bool RowsNormalised,
    double ElapsedS) : Report
{
    protected override string Subject => "reconstruct";

    public static ReconstructReport From(string input, string output, TransmissionMatrixFacts facts, double elapsedS) => new(
        input,
        output,
        facts.CameraRegion.PixelCount,
        facts.Grid.Count,
        facts.Quality.ValidPixels,
        facts.Quality.ValidModes,
        facts.Drift.Method,
        facts.Drift.TrackerPhaseRad.Length,
        facts.Drift.TrackerPhaseRad.DefaultIfEmpty(double.NaN).Max() - facts.Drift.TrackerPhaseRad.DefaultIfEmpty(double.NaN).Min(),
        facts.Drift.LargestGapRad,
        facts.Drift.TrackerOverlap.DefaultIfEmpty(double.NaN).Min(),
        facts.Drift.WalkRateRad2PerS,
        facts.Drift.StepErrorRad.Select(Math.Abs).DefaultIfEmpty(double.NaN).Max(),
        facts.Drift.FrameGain.DefaultIfEmpty(double.NaN).Max() - facts.Drift.FrameGain.DefaultIfEmpty(double.NaN).Min(),
        facts.Quality.MeanVisibility,
        facts.Quality.SignalToNoise,
        facts.Quality.RowsNormalised,
        elapsedS)
    {
        Warnings = facts.Quality.Warnings,
    };

    public override void WriteText(TextReport text)
    {
        text.Heading($"Reconstructed {Input} into {Output}");
        text.Row("matrix", $"{TextReport.Count(PixelCount)} pixels × {TextReport.Count(ModeCount)} modes");
        text.Row("valid", $"{TextReport.Count(ValidPixelCount)} pixels, {TextReport.Count(ValidModeCount)} modes");
        WriteDrift(text);
        text.Row("visibility", MeanVisibility);
        text.Row("signal to noise", SignalToNoise);
        text.Row("rows normalised", RowsNormalised ? "by the reference intensity" : "no (no reference frames)");
    }

    private void WriteDrift(TextReport text)
    {
        if (DriftMethod == DriftMethod.None)
        {
            text.Row("drift", "not removed");
            return;
        }

        text.Row("drift removed", $"{TextReport.Figure(DriftRangeRad, "rad")} over {TrackerCount} showings of the tracked pattern");
        text.Row("largest step", $"{TextReport.Figure(LargestTrackerGapRad, "rad")} from one tracker to the next");
        text.Row("tracker overlap", $"at least {TextReport.Figure(SmallestTrackerOverlap)}");
        text.Row("random walk", WalkRateRad2PerS, "rad²/s");
        text.Row("phase step error", $"at most {TextReport.Figure(LargestStepErrorRad, "rad")}, removed");
        text.Row("laser power", $"within {TextReport.Figure(100 * PowerSpread)} % over all frames, divided out");
    }
}
