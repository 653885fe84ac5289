namespace TmLab.Planning;

/// <summary>How often the tracked pattern is shown, and why.</summary>
/// <param name="EveryModes">A tracker before every so many modes, and one at the end; 0 for none.</param>
/// <param name="Reason">One sentence.</param>
/// <param name="IsAmbiguous">Whether the phase may move by more than π/2 from one tracker to the next, so that it may be unwrapped wrongly.</param>
public sealed record TrackerSpacing(int EveryModes, string Reason, bool IsAmbiguous)
{
    /// <summary>The phase may move by this much from one tracker to the next, at four standard deviations.</summary>
    public const double LargestGapRad = Math.PI / 2;

    /// <summary>At least so many stretches between trackers, so that a sample that moves is seen to do so.</summary>
    private const int FewestStretches = 8;

    /// <summary>
    /// The spacing asked for, or the one with the highest predicted fidelity per time among those between whose trackers the phase
    /// moves by less than π/2 at four standard deviations.
    /// </summary>
    internal static TrackerSpacing Choose(PlanSettings settings, BudgetModel model)
    {
        double gapOfOne = settings.DriftRadPerSqrtSecond * settings.DriftRadPerSqrtSecond * settings.Steps / settings.FrameRateHz;
        if (settings.TrackerEveryModes is { } asked)
        {
            return Asked(asked, settings, gapOfOne);
        }

        // 4 √(q (m + 1) S Δt) ≤ π/2.
        double sigma = LargestGapRad / 4;
        double allowed = gapOfOne > 0 ? (sigma * sigma / gapOfOne) - 1 : double.PositiveInfinity;
        int modes = settings.MeasuredPatterns;
        int most = (int)Math.Clamp(Math.Min(allowed, modes / FewestStretches), 1, modes);
        int best = Candidates(most).MaxBy(m => FidelityPerTime(m, settings, model));
        return allowed < 1
            ? new TrackerSpacing(1, $"a tracker before every mode, and even so the phase may move by {Gap(1, gapOfOne):F2} rad in between", true)
            : new TrackerSpacing(best, Explain(best, allowed, modes, gapOfOne), false);
    }

    private static TrackerSpacing Asked(int asked, PlanSettings settings, double gapOfOne)
    {
        if (asked == 0)
        {
            return new TrackerSpacing(0, "no trackers, as asked for: what drifts from one mode to the next stays in the matrix", true);
        }

        double gap = Gap(Math.Min(asked, settings.MeasuredPatterns), gapOfOne);
        return new TrackerSpacing(
            asked, FormattableString.Invariant($"as asked for; the phase moves by up to {gap:F2} rad (4 sigma) from one tracker to the next"), gap > LargestGapRad);
    }

    private static IEnumerable<int> Candidates(int most) =>
        Enumerable.Range(0, 31).SelectMany(b => new[] { 1L << b, 3L << b }).Where(m => m <= most).Select(m => (int)m).Append(most);

    private static double FidelityPerTime(int every, PlanSettings settings, BudgetModel model)
    {
        Measurement.Schedule schedule = settings.BuildSchedule(every);
        return model.Of(schedule).Fidelity / schedule.Frames.Length;
    }

    private static double Gap(int every, double gapOfOne) => 4 * Math.Sqrt(gapOfOne * (every + 1));

    private static string Explain(int every, double allowed, int modes, double gapOfOne)
    {
        string bound = every >= (int)allowed
            ? "more seldom, it could no longer be unwrapped with certainty"
            : every >= modes / FewestStretches
                ? "more seldom, a sample that moves would be noticed too late"
                : "this gives the highest fidelity per time";
        return FormattableString.Invariant(
            $"the phase moves by up to {Gap(every, gapOfOne):F2} rad (4 sigma) from one tracker to the next, below π/2; {bound}");
    }
}
