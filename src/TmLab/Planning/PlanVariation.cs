using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Planning;

/// <summary>What one changed setting would do to a plan, all else being equal.</summary>
/// <param name="Change">The change, in words.</param>
/// <param name="Fidelity">Predicted fidelity with it.</param>
/// <param name="FidelityChange">By how much that is more than without.</param>
/// <param name="FrameCount">Number of frames with it.</param>
/// <param name="DurationS">Duration with it, seconds.</param>
/// <param name="SaturatedShare">Share of pixels that saturate with it.</param>
public sealed record PlanVariation(
    string Change, double Fidelity, double FidelityChange, int FrameCount, double DurationS, double SaturatedShare)
{
    /// <summary>Every variation that is possible for the settings.</summary>
    internal static ImmutableArray<PlanVariation> All(PlanSettings settings, int trackerEvery, BudgetModel model, PlannedBudget budget) =>
        [.. Changes(settings, trackerEvery).Select(c => Make(c, model, budget))];

    private static PlanVariation Make((string Words, PlanSettings Settings, int Every) change, BudgetModel model, PlannedBudget budget)
    {
        Schedule schedule = change.Settings.BuildSchedule(change.Every);
        PlannedBudget changed = model.With(change.Settings).Of(schedule);
        return new PlanVariation(
            change.Words, changed.Fidelity, changed.Fidelity - budget.Fidelity, schedule.Frames.Length,
            schedule.Frames.Length / change.Settings.FrameRateHz, changed.SaturatedShare);
    }

    private static IEnumerable<(string Words, PlanSettings Settings, int Every)> Changes(PlanSettings s, int every)
    {
        if (s.Steps > StepChecks.FewestSteps)
        {
            yield return ("one step fewer", s with { Steps = s.Steps - 1 }, every);
        }

        yield return ("one step more", s with { Steps = s.Steps + 1 }, every);
        if (every > 1)
        {
            yield return ("trackers twice as often", s, every / 2);
        }

        if (every > 0 && every < s.MeasuredPatterns)
        {
            yield return ("trackers half as often", s, every * 2);
        }

        yield return ("exposure twice as long", Exposed(s, 2, 2) with { FrameRateHz = s.FrameRateHz / 2 }, every);
        yield return ("exposure half as long", Exposed(s, 0.5, 0.5) with { FrameRateHz = s.FrameRateHz * 2 }, every);
        yield return ("twice the light", Exposed(s, 2, 2), every);
        yield return ("twice the reference", Exposed(s, 1, 2), every);
        yield return ("half the reference", Exposed(s, 1, 0.5), every);
        yield return ("half the drift", s with { DriftRadPerSqrtSecond = s.DriftRadPerSqrtSecond / 2 }, every);
        if (double.IsFinite(s.DecorrelationTimeS))
        {
            yield return ("twice the decorrelation time", s with { DecorrelationTimeS = 2 * s.DecorrelationTimeS }, every);
        }
    }

    private static PlanSettings Exposed(PlanSettings s, double signal, double reference) => s with
    {
        SignalElectrons = s.SignalElectrons * signal,
        ReferenceElectrons = s.ReferenceElectrons * reference,
    };
}
