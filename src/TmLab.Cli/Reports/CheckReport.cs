using System.Collections.Immutable;
using System.Text.Json.Serialization;
using TmLab.Cli.Failures;
using TmLab.Cli.Output;
using TmLab.Cli.Stages;
using TmLab.Matrix;
using TmLab.Reconstruction;

namespace TmLab.Cli.Reports;

/// <summary>How far a matrix can be trusted, on one page.</summary>
internal sealed record CheckReport(
    string Input,
    string Contents,
    ImmutableArray<string>? VerifiedDatasets,
    double PredictedFidelity,
    bool IsUpperBound,
    double PredictedEnhancement,
    double IdealEnhancement,
    double SignalToNoise,
    ImmutableArray<LossSection> Losses,
    string? Dominating,
    ImmutableArray<string> Advice,
    int ValidPixelCount,
    int PixelCount,
    int ValidModeCount,
    int ModeCount,
    ImmutableArray<int> LostPatterns,
    ImmutableArray<FrameFinding> FrameFindings,
    double DecorrelationTimeS,
    int AmbiguousGapCount,
    ImmutableArray<RequirementSection> Requirements) : Report
{
    protected override string Subject => "check";

    public override ExitCode ExitCode => Requirements.All(r => r.Met) ? ExitCode.Fine : ExitCode.QualityGate;

    [JsonIgnore]
    private bool IsMatrix => !Losses.IsEmpty;

    /// <summary>A file that is only compared with its checksums.</summary>
    public static CheckReport OfChecksums(string input, string contents, ImmutableArray<string>? verified) => new(
        input, contents, verified, double.NaN, false, double.NaN, double.NaN, double.NaN, [], null, [], 0, 0, 0, 0, [], [], double.NaN, 0, []);

    public static CheckReport Of(CheckRequest request, TransmissionMatrixFacts facts, ImmutableArray<string>? verified)
    {
        Verdict verdict = Verdict.Of(facts);
        return new CheckReport(
            request.Input,
            "transmission matrix",
            verified,
            verdict.PredictedFidelity,
            verdict.IsUpperBound,
            verdict.PredictedEnhancement,
            verdict.IdealEnhancement,
            verdict.SignalToNoise,
            [.. verdict.Parts.Select(p => new LossSection(p.Name, p.Loss))],
            verdict.Dominating?.Name,
            verdict.Advice,
            facts.Quality.ValidPixels,
            facts.CameraRegion.PixelCount,
            facts.Quality.ValidModes,
            facts.Grid.Count,
            facts.Quality.LostPatterns,
            facts.Quality.Frames,
            facts.Drift.Decorrelation.TimeConstantS,
            facts.Drift.AmbiguousGaps.Length,
            [.. request.Requirements.Select(r => RequirementSection.Of(r, verdict))])
        {
            Warnings = facts.Quality.Warnings,
        };
    }

    public override void WriteText(TextReport text)
    {
        text.Heading($"{Input}: {Contents}");
        if (VerifiedDatasets is { } verified)
        {
            text.Row("checksums", verified.IsEmpty ? "none in the file" : $"right: {string.Join(", ", verified)}");
        }

        if (IsMatrix)
        {
            WriteVerdict(text);
        }
    }

    private void WriteVerdict(TextReport text)
    {
        text.Row("predicted fidelity", IsUpperBound ? $"at most {TextReport.Figure(PredictedFidelity)}" : TextReport.Figure(PredictedFidelity));
        text.Row("predicted focus", $"{TextReport.Figure(PredictedEnhancement)} times the mean (ideal {TextReport.Figure(IdealEnhancement)})");
        text.Row("signal to noise", SignalToNoise);
        text.Row("valid", $"{TextReport.Count(ValidPixelCount)} of {TextReport.Count(PixelCount)} pixels, {TextReport.Count(ValidModeCount)} of {TextReport.Count(ModeCount)} modes");
        text.Row("sample", double.IsNaN(DecorrelationTimeS) ? "no significant change" : $"decorrelates in {TextReport.Figure(DecorrelationTimeS, "s")}");
        text.Blank();
        text.Heading("Fidelity lost to each cause alone");
        text.Rows([.. Losses.Select(l => (l.Cause, double.IsNaN(l.Loss) ? "not known" : FormattableString.Invariant($"{l.Loss:F4}{(l.Cause == Dominating ? "  dominates" : "")}")))]);
        text.Blank();
        text.Heading(Advice.IsEmpty ? "Nothing at the bench would help much." : "What would help");
        Advice.ToList().ForEach(a => text.Line("  " + a));
        Requirements.ToList().ForEach(r => text.Row(
            "required", $"{r.Quantity.ToString().ToLowerInvariant()} {TextReport.Figure(r.AtLeast)}: {(r.Met ? "reached" : "NOT reached")} ({TextReport.Figure(r.Found)})"));
    }
}

/// <summary>A cause and the fidelity that it alone costs.</summary>
internal sealed record LossSection(string Cause, double Loss);

/// <summary>What was required and what was found; a quantity that is not known does not reach anything.</summary>
internal sealed record RequirementSection(RequiredQuantity Quantity, double AtLeast, double Found, bool Met)
{
    public static RequirementSection Of(Requirement requirement, Verdict verdict)
    {
        double found = requirement.Quantity switch
        {
            RequiredQuantity.Fidelity => verdict.PredictedFidelity,
            RequiredQuantity.Enhancement => verdict.PredictedEnhancement,
            _ => verdict.SignalToNoise,
        };
        return new RequirementSection(requirement.Quantity, requirement.AtLeast, found, found >= requirement.AtLeast);
    }
}
