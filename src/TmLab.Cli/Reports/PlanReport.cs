using System.Collections.Immutable;
using TmLab.Cli.Options;
using TmLab.Cli.Output;
using TmLab.Cli.Stages;
using TmLab.Measurement;
using TmLab.Planning;

namespace TmLab.Cli.Reports;

/// <summary>What was planned, and what it should be worth.</summary>
internal sealed record PlanReport(
    string Output,
    BasisKind Basis,
    int PatternCount,
    int PlannedPatternCount,
    int GridRows,
    int GridColumns,
    int Steps,
    int FrameCount,
    int ImageCount,
    long FrameBytes,
    double DurationS,
    int TrackersEveryModes,
    int TrackerCount,
    string TrackerReason,
    double TrackerGapRad,
    double PredictedFidelity,
    double PredictedEnhancement,
    double SignalToNoise,
    PlanPartsSection Parts,
    ImmutableArray<PlanVariation> Variations,
    double ElapsedS) : Report
{
    protected override string Subject => "plan";

    public static PlanReport From(string output, PlanOutcome outcome, double elapsedS)
    {
        MeasurementPlan plan = outcome.Plan;
        return new PlanReport(
            output,
            plan.Settings.Modes.Basis,
            plan.Settings.Modes.PatternCount,
            plan.Settings.MeasuredPatterns,
            plan.Settings.Modes.Grid.Rows,
            plan.Settings.Modes.Grid.Columns,
            plan.Settings.Steps,
            plan.Schedule.Frames.Length,
            outcome.ImageCount,
            plan.FrameBytes,
            plan.DurationS,
            plan.Spacing.EveryModes,
            plan.Schedule.Trackers.Count(),
            plan.Spacing.Reason,
            plan.Budget.TrackerGapRad,
            plan.Budget.Fidelity,
            plan.Budget.Enhancement,
            plan.Budget.SignalToNoise,
            PlanPartsSection.From(plan.Budget),
            plan.Variations,
            elapsedS)
        {
            Warnings = plan.Warnings,
        };
    }

    public override void WriteText(TextReport text)
    {
        text.Heading($"Planned {Output}");
        text.Row("patterns", $"{TextReport.Count(PlannedPatternCount)} of {TextReport.Count(PatternCount)} {Basis} on {GridRows} × {GridColumns} macro-pixels, {Steps} steps");
        text.Row("frames", $"{TextReport.Count(FrameCount)}, {ByteSize.Format(FrameBytes)}, {Duration.Describe(TimeSpan.FromSeconds(DurationS))}");
        text.Row("images", TextReport.Count(ImageCount));
        text.Row("trackers", $"{TextReport.Count(TrackerCount)}, one before every {TextReport.Count(TrackersEveryModes)} modes");
        text.Row("", TrackerReason);
        text.Row("predicted fidelity", $"{Fidelity(PredictedFidelity)} to the sample at the first frame");
        text.Row("predicted enhancement", $"{TextReport.Figure(PredictedEnhancement)} for one focus");
        Parts.WriteText(text);
        text.Blank();
        text.Heading("If it were otherwise: fidelity, frames, time");
        text.Rows([.. Variations.Select(v => (
            v.Change,
            FormattableString.Invariant(
                $"{Fidelity(v.Fidelity)} ({v.FidelityChange:+0.0000;-0.0000;±0.0000}), {TextReport.Count(v.FrameCount)}, {Duration.Describe(TimeSpan.FromSeconds(v.DurationS))}{Saturated(v)}")))]);
    }

    private static string Fidelity(double value) => value.ToString("F4", System.Globalization.CultureInfo.InvariantCulture);

    private static string Saturated(PlanVariation v) =>
        v.SaturatedShare > 1e-3 ? FormattableString.Invariant($", {100 * v.SaturatedShare:G2} % of the pixels saturated") : "";
}

/// <summary>The parts of a predicted fidelity: what it would be if each part stood alone, and the noise parts over the signal.</summary>
internal sealed record PlanPartsSection(
    double NoiseFidelity,
    double DriftFidelity,
    double DecorrelationFidelity,
    double PanelFidelity,
    double ShotNoiseShare,
    double ReadNoiseShare,
    double CountRoundingShare,
    double DriftVarianceRad2,
    double SaturatedShare)
{
    public static PlanPartsSection From(PlannedBudget b) => new(
        b.NoiseFidelity, b.DriftFidelity, b.DecorrelationFidelity, b.PanelEfficiency, b.ShotNoise, b.ReadNoise, b.CountRounding,
        b.DriftVarianceRad2, b.SaturatedShare);

    public void WriteText(TextReport text)
    {
        text.Row("  noise alone", FormattableString.Invariant(
            $"{NoiseFidelity:F4} (noise over signal: shot {ShotNoiseShare:G3}, read {ReadNoiseShare:G3}, rounding {CountRoundingShare:G3})"));
        text.Row("  drift alone", FormattableString.Invariant($"{DriftFidelity:F4} (variance left {DriftVarianceRad2:G3} rad²)"));
        text.Row("  decorrelation alone", FormattableString.Invariant($"{DecorrelationFidelity:F4}"));
        text.Row("  panel levels alone", FormattableString.Invariant($"{PanelFidelity:F4}"));
        text.Row("  saturated", FormattableString.Invariant($"{100 * SaturatedShare:G2} % of the pixels"));
    }
}
