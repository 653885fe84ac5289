using System.Collections.Immutable;
using TmLab.Failures;

namespace TmLab.Measurement;

/// <summary>Checks of the phase steps of a schedule: none missing, none without a phase, at least three distinct ones.</summary>
public static class StepChecks
{
    /// <summary>
    /// Two commanded phases closer than this (modulo 2π) count as one step, radians: far below any useful step, far above the
    /// rounding of phases written with four digits.
    /// </summary>
    public const double SamePhaseRad = 1e-3;

    /// <summary>Fewest distinct steps from which offset, cosine and sine part can be told apart.</summary>
    public const int FewestSteps = 3;

    /// <summary>All checks of steps.</summary>
    public static ImmutableArray<InputProblem> Check(ImmutableArray<ScheduledFrame> rows, string file)
    {
        var problems = new ProblemList(file);
        AddBadPhases(rows, problems);
        AddIncompleteModes(rows, problems);
        AddIncompleteTrackers(rows, problems);
        AddTooFewSteps(rows, problems);
        return problems.ToImmutable();
    }

    /// <summary>The number of phases that differ modulo 2π by more than <see cref="SamePhaseRad"/>.</summary>
    public static int DistinctPhases(IEnumerable<double> phasesRad)
    {
        double[] sorted = [.. phasesRad.Select(p => p - (2 * Math.PI * Math.Floor(p / (2 * Math.PI)))).Order()];
        if (sorted.Length == 0)
        {
            return 0;
        }

        int distinct = 1 + Enumerable.Range(1, sorted.Length - 1).Count(i => sorted[i] - sorted[i - 1] > SamePhaseRad);
        bool endsMeet = distinct > 1 && sorted[0] + (2 * Math.PI) - sorted[^1] <= SamePhaseRad;
        return endsMeet ? distinct - 1 : distinct;
    }

    private static void AddBadPhases(ImmutableArray<ScheduledFrame> rows, ProblemList problems) =>
        problems.AddOfOneKind(rows
            .Select((row, i) => (Row: row, Place: ScheduleChecks.RowPlace(i)))
            .Where(r => r.Row.IsStepped && !double.IsFinite(r.Row.PhaseRad))
            .Select(r => (r.Place, $"the phase of frame {r.Row.Index} is not a finite number", "write phase_rad in radians for every mode and tracker frame")));

    private static void AddIncompleteModes(ImmutableArray<ScheduledFrame> rows, ProblemList problems)
    {
        List<(int Mode, HashSet<int> Steps)> modes = [.. rows
            .Where(r => r.Role == FrameRole.Mode).GroupBy(r => r.Mode).Select(g => (g.Key, g.Select(r => r.Step).ToHashSet()))];
        ImmutableArray<int> expected = ExpectedSteps([.. modes.Select(m => m.Steps)]);
        AddGapInSteps(expected, "mode", problems);
        problems.AddOfOneKind(modes.SelectMany(m => expected.Where(s => !m.Steps.Contains(s)).Select(s => (
            $"mode {m.Mode}", $"step {s} is missing from mode {m.Mode}", "record the mode again with all its steps"))));
        problems.AddOfOneKind(modes.SelectMany(m => m.Steps.Where(s => !expected.Contains(s)).Select(s => (
            $"mode {m.Mode}", $"mode {m.Mode} has a step {s}, which other modes lack", "give all modes the same steps"))));
    }

    private static void AddIncompleteTrackers(ImmutableArray<ScheduledFrame> rows, ProblemList problems)
    {
        // Numbered by position, because the file's own frame numbers may be wrong.
        ImmutableArray<ScheduledFrame> numbered = [.. rows.Select((row, i) => row with { Index = i })];
        List<List<ScheduledFrame>> groups = [.. StepGroup.Collect(numbered)
            .Where(g => g.Role == FrameRole.Tracker).Select(g => g.Frames.Select(f => rows[f]).ToList())];
        ImmutableArray<int> expected = ExpectedSteps([.. groups.Select(Steps)]);
        AddGapInSteps(expected, "tracker", problems);
        if (groups.TrueForAll(g => Steps(g).SetEquals(expected)))
        {
            return;
        }

        // A step missing from one tracker makes the collected group reach into the next; the runs of the recording tell where.
        List<List<ScheduledFrame>> incompleteRuns = [.. TrackerRuns(rows).Where(r => !Steps(r).SetEquals(expected))];
        problems.AddOfOneKind(incompleteRuns.Select(run => (
            $"frame {run[0].Index}",
            $"the tracker that starts at frame {run[0].Index} (mode {run[0].Mode}) has steps {Listed(Steps(run))}; the others have {Listed(expected)}",
            "remove its rows and frames, or record it whole")));
    }

    private static void AddTooFewSteps(ImmutableArray<ScheduledFrame> rows, ProblemList problems) =>
        problems.AddOfOneKind(rows
            .Where(r => r.IsStepped && double.IsFinite(r.PhaseRad))
            .GroupBy(r => (r.Role, r.Mode))
            .Select(g => (g.Key, Found: DistinctPhases(g.Select(r => r.PhaseRad))))
            .Where(g => g.Found < FewestSteps)
            .Select(g => (
                $"{Word(g.Key.Role)} {g.Key.Mode}", $"{g.Found} distinct phase steps (modulo 2π); at least {FewestSteps} are needed",
                "record three or more different phases a mode; phase_rad is in radians")));

    /// <summary>The steps that at least half of the groups have: one mistyped step must not make every other group look incomplete.</summary>
    private static ImmutableArray<int> ExpectedSteps(List<HashSet<int>> groups) =>
        [.. groups.SelectMany(g => g).GroupBy(s => s).Where(s => 2 * s.Count() >= groups.Count).Select(s => s.Key).Order()];

    private static void AddGapInSteps(ImmutableArray<int> steps, string what, ProblemList problems)
    {
        if (!steps.IsEmpty && (steps[0] != 0 || steps[^1] != steps.Length - 1))
        {
            problems.Add("column step", $"the steps of the {what}s are {Listed(steps)}, not 0 … {steps.Length - 1}", "number the steps from 0 without a gap");
        }
    }

    private static List<List<ScheduledFrame>> TrackerRuns(ImmutableArray<ScheduledFrame> rows)
    {
        var runs = new List<List<ScheduledFrame>>();
        for (int i = 0; i < rows.Length; i++)
        {
            if (rows[i].Role != FrameRole.Tracker)
            {
                continue;
            }

            bool continues = i > 0 && rows[i - 1].Role == FrameRole.Tracker && rows[i - 1].Mode == rows[i].Mode
                && !runs[^1].Exists(f => f.Step == rows[i].Step);
            if (!continues)
            {
                runs.Add([]);
            }

            runs[^1].Add(rows[i]);
        }

        return runs;
    }

    private static HashSet<int> Steps(List<ScheduledFrame> frames) => [.. frames.Select(f => f.Step)];

    private static string Listed(IEnumerable<int> steps) => string.Join(", ", steps.Order().Take(16));

    private static string Word(FrameRole role) => role == FrameRole.Mode ? "mode" : "tracker";
}
