using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction.Frames;

/// <summary>
/// Looks for frames that do not stand where the schedule says. Copies betray themselves; a missing or a doubled frame shifts all later
/// ones, so that no pattern fits until the shift is undone; an exchange of neighbours is found by undoing it. Shifts are looked for where
/// the steps of a pattern stand one after the other.
/// </summary>
internal sealed class FrameSearch
{
    // Frames that do not belong together misfit by about ½; phases 0.3 rad off by 0.05.
    private const double SuspiciousMisfit = 0.1;
    private const double SuspiciousRatio = 4;

    // Undoing an exchange must take away this share of the misfit.
    private const double LeftAfterRepair = 0.35;

    // Explanations whose misfits differ by less cannot be told apart.
    private const double TieRatio = 1.5;
    private const double TieMisfit = 0.02;

    // So many groups before the end a shift no longer pays for itself in the shift's path.
    private const int TailGroups = 6;
    private static readonly ImmutableArray<int> Offsets = [0, -1, 1, -2, 2];

    private readonly Schedule _schedule;
    private readonly ImmutableArray<StepGroup> _groups;
    private readonly int[] _groupOf;
    private readonly GroupMisfit _misfit;
    private readonly HashSet<int> _copies;
    private readonly List<FrameFinding> _findings = [];
    private readonly HashSet<StepGroup> _givenUp = [];
    private readonly HashSet<int> _explained = [];
    private FramePlaces _places;

    private FrameSearch(Schedule schedule, GroupMisfit misfit, HashSet<int> copies)
    {
        (_schedule, _groups, _misfit, _copies) = (schedule, schedule.Groups, misfit, copies);
        _groupOf = [.. Enumerable.Repeat(-1, schedule.Frames.Length)];
        for (int k = 0; k < _groups.Length; k++)
        {
            _groups[k].Frames.ToList().ForEach(f => _groupOf[f] = k);
        }

        _places = FramePlaces.Of(schedule.Frames.Length, _ => 0);
    }

    /// <summary>Looks for them.</summary>
    /// <param name="schedule">The frames as they should be.</param>
    /// <param name="arm">Which arm was stepped.</param>
    /// <param name="sample">Counts by place in the file.</param>
    public static FrameSearchOutcome Run(Schedule schedule, SteppedArm arm, PixelSample sample)
    {
        ImmutableArray<double> commanded = FramePhases.Commanded(schedule, arm);
        ImmutableArray<FramePlaces> asScheduled = [FramePlaces.Of(schedule.Frames.Length, _ => 0)];
        HashSet<int> copies = FrameCopies.Find(schedule, sample);
        GroupMisfit? misfit = GroupMisfit.Learn(schedule.Groups, commanded, sample, asScheduled);
        if (misfit is null)
        {
            return new FrameSearchOutcome(schedule, schedule, [], null, asScheduled[0]);
        }

        double[] asIs = [.. schedule.Groups.Select(g => misfit.Of(g, asScheduled[0]))];
        if (copies.Count == 0 && !asIs.Any(m => m > Suspicious(asIs)))
        {
            return new FrameSearchOutcome(schedule, schedule, [], misfit, asScheduled[0]);
        }

        bool mayShift = schedule.Groups.All(AreNeighbours);
        ImmutableArray<FramePlaces> shifted = mayShift ? [.. Offsets.Select(o => FramePlaces.Of(schedule.Frames.Length, _ => o))] : asScheduled;
        misfit = GroupMisfit.Learn(schedule.Groups, commanded, sample, shifted) ?? misfit;
        var search = new FrameSearch(schedule, misfit, copies);
        search.Explain(shifted);
        return new FrameSearchOutcome(
            schedule,
            search._places.Apply(schedule, search._givenUp),
            [.. search._findings.OrderBy(f => f.Frames[0])],
            misfit,
            search._places);
    }

    /// <summary>The misfit above which a group is looked at.</summary>
    private static double Suspicious(double[] misfits)
    {
        double[] sorted = [.. misfits.Where(double.IsFinite).Order()];
        double median = sorted.Length == 0 ? 0 : sorted[sorted.Length / 2];
        return median > SuspiciousMisfit ? SuspiciousMisfit : Math.Max(SuspiciousMisfit, SuspiciousRatio * median);
    }

    private static bool AreNeighbours(StepGroup group) =>
        Enumerable.Range(1, group.Frames.Length - 1).All(s => group.Frames[s] == group.Frames[s - 1] + 1);

    private void Explain(ImmutableArray<FramePlaces> shifted)
    {
        if (shifted.Length > 1)
        {
            FollowShifts(shifted);
            ExplainTail();
        }

        _copies.Where(c => !_explained.Contains(c)).Order().ToList().ForEach(ExplainCopy);
        ExplainExchanges();
    }

    private void FollowShifts(ImmutableArray<FramePlaces> shifted)
    {
        double[][] misfit = [.. _groups.Select(g => shifted.Select(o => _misfit.Of(g, o)).ToArray())];
        // The path wants neighbouring offsets side by side.
        int[] rising = [.. Enumerable.Range(0, Offsets.Length).OrderBy(i => Offsets[i])];
        int[] path = ShiftPath.Find([.. misfit.Select(m => rising.Select(i => m[i]).ToArray())]);
        int[] offset = [.. path.Select(i => Offsets[rising[i]])];
        int[] ofFrame = new int[_schedule.Frames.Length];
        for (int f = 0, last = offset[0]; f < ofFrame.Length; f++)
        {
            last = _groupOf[f] >= 0 ? offset[_groupOf[f]] : last;
            ofFrame[f] = last;
        }

        _places = FramePlaces.Of(ofFrame.Length, f => ofFrame[f]);
        for (int k = 0; k < offset.Length; k++)
        {
            int before = k == 0 ? 0 : offset[k - 1];
            if (offset[k] != before)
            {
                LocateShift(k, before, offset[k]);
            }
        }
    }

    /// <summary>In which frame of group k − 1 or k the offset changes.</summary>
    private void LocateShift(int k, int before, int after)
    {
        int[] candidates = [.. FramesAround(k)];
        if (after > before)
        {
            int[] copied = [.. candidates.Where(f => _copies.Contains(f + before + 1))];
            candidates = copied.Length > 0 ? copied : candidates;
        }

        (int Frame, FramePlaces Places, double Cost)[] all =
            [.. candidates.Select(f => (f, Shifted(f, k, before, after))).Select(c => (c.f, c.Item2, Cost(c.Item2, Math.Max(0, k - 1), k)))];
        Accept(all, before, after);
    }

    private IEnumerable<int> FramesAround(int k) => k == 0 ? _groups[0].Frames : _groups[k - 1].Frames.Concat(_groups[k].Frames);

    // Groups k − 1 and k with frames before f at one offset and those behind it at the other; of two, f itself has the first place.
    private FramePlaces Shifted(int frame, int k, int before, int after)
    {
        bool lost = after < before;
        var changes = FramesAround(k).Select(f =>
            (f, f < frame ? f + before : f > frame ? f + after : lost ? FramePlaces.Nowhere : f + before));
        return _places.With([.. changes]);
    }

    private void Accept((int Frame, FramePlaces Places, double Cost)[] all, int before, int after)
    {
        (int Frame, FramePlaces Places, double Cost) best = all.MinBy(c => c.Cost);
        (int Frame, FramePlaces Places, double Cost)[] tied = [.. all.Where(c => IsTied(c.Cost, best.Cost))];
        _places = best.Places;
        bool dropped = after < before;
        if (!dropped)
        {
            _explained.Add(best.Frame + before + 1);
        }

        StepGroup group = _groups[_groupOf[best.Frame]];
        AddFinding(
            dropped ? FrameFindingKind.Dropped : FrameFindingKind.Duplicated, [.. tied.Select(c => c.Frame + before)], group.Mode, !dropped);
        // Where several frames may be the missing one, what stands in all their groups is not known.
        tied.Where(_ => dropped).ToList().ForEach(c => _givenUp.Add(_groups[_groupOf[c.Frame]]));
    }

    /// <summary>
    /// A frame lost among the last few groups leaves a copy in the last place, as the recording goes on until it has its number of frames.
    /// </summary>
    private void ExplainTail()
    {
        int last = _schedule.Frames.Length - 1;
        if (!_copies.Contains(last) || _explained.Contains(last))
        {
            return;
        }

        _explained.Add(last);
        int offset = _places[_groups[^1].Frames[^1]] - _groups[^1].Frames[^1];
        if (_places[_groups[^1].Frames[^1]] != last)
        {
            return;
        }

        int from = Math.Max(0, _groups.Length - TailGroups);
        int first = _groups[from].Frames[0];
        var all = Enumerable.Range(first, last - first + 1).Where(f => _groupOf[f] >= 0)
            .Select(f => (f, _places.With([.. Enumerable.Range(f, last - f + 1).Select(g => (g, g == f ? FramePlaces.Nowhere : g + offset - 1))])))
            .Select(c => (c.f, c.Item2, Cost(c.Item2, from, _groups.Length - 1))).ToArray();
        Accept(all, offset, offset - 1);
    }

    /// <summary>A copy without a shift behind it; near the end a shift may have gone unseen.</summary>
    private void ExplainCopy(int place)
    {
        int frame = Enumerable.Range(Math.Max(0, place - 2), 5).FirstOrDefault(f => f < _groupOf.Length && _places[f] == place, -1);
        if (frame < 0 || _groupOf[frame] < 0)
        {
            return;
        }

        int k = _groupOf[frame];
        FramePlaces stale = _places.With((frame, FramePlaces.Nowhere));
        if (k >= _groups.Length - TailGroups)
        {
            int offset = place - frame;
            FramePlaces later = _places.With([.. Enumerable.Range(frame, _groupOf.Length - frame).Select(f => (f, f + offset + 1))]);
            if (Cost(later, k, _groups.Length - 1) < Cost(stale, k, _groups.Length - 1))
            {
                _places = later;
                AddFinding(FrameFindingKind.Duplicated, [place - 1], _groups[k].Mode, true);
                return;
            }
        }

        _places = stale;
        AddFinding(FrameFindingKind.Stale, [place], _groups[k].Mode, false);
    }

    private void ExplainExchanges()
    {
        double[] misfits = [.. _groups.Select(g => _misfit.Of(g, _places))];
        double suspicious = Suspicious(misfits);
        for (int k = 0; k < _groups.Length; k++)
        {
            // Undoing an exchange with the group before may have mended this one.
            if (!_givenUp.Contains(_groups[k]) && _groups[k].Frames.All(f => _places[f] >= 0) && _misfit.Of(_groups[k], _places) > suspicious)
            {
                ExplainExchange(k, suspicious);
            }
        }
    }

    private void ExplainExchange(int k, double suspicious)
    {
        var all = _groups[k].Frames.SelectMany(f => new[] { f - 1, f }).Distinct()
            .Where(f => f >= 0 && f + 1 < _groupOf.Length && _groupOf[f] >= 0 && _groupOf[f + 1] >= 0 && _places[f] >= 0 && _places[f + 1] >= 0)
            .Select(f => (Frame: f, Places: _places.With((f, _places[f + 1]), (f + 1, _places[f]))))
            .Select(c => (c.Frame, c.Places, Before: PairCost(_places, c.Frame), After: PairCost(c.Places, c.Frame)))
            .Where(c => c.After < LeftAfterRepair * c.Before && _misfit.Of(_groups[k], c.Places) < suspicious)
            .ToArray();
        if (all.Length == 0)
        {
            return;
        }

        // The exchange across two groups mends both; one inside a group cannot.
        var best = all.MinBy(c => c.After - c.Before);
        var tied = all.Where(c => c.Frame == best.Frame || (IsTied(c.After, best.After) && SameGroups(c.Frame, best.Frame))).ToArray();
        AddFinding(
            FrameFindingKind.Swapped,
            [.. tied.SelectMany(c => new[] { _places[c.Frame], _places[c.Frame + 1] }).Distinct().Order()],
            _groups[k].Mode,
            tied.Length == 1);
        _places = best.Places;
        if (tied.Length > 1)
        {
            _givenUp.Add(_groups[k]);
        }
    }

    private bool SameGroups(int a, int b) => _groupOf[a] == _groupOf[b] && _groupOf[a + 1] == _groupOf[b + 1];

    private double PairCost(FramePlaces places, int frame) =>
        _misfit.Of(_groups[_groupOf[frame]], places)
        + (_groupOf[frame + 1] == _groupOf[frame] ? 0 : _misfit.Of(_groups[_groupOf[frame + 1]], places));

    // A group too incomplete to be judged neither speaks for an explanation nor against it.
    private double Cost(FramePlaces places, int from, int to) =>
        Enumerable.Range(from, to - from + 1).Select(k => _misfit.Of(_groups[k], places)).Where(double.IsFinite).Sum();

    private static bool IsTied(double cost, double best) => cost <= (TieRatio * best) + TieMisfit;

    private void AddFinding(FrameFindingKind kind, ImmutableArray<int> frames, int pattern, bool repaired) =>
        _findings.Add(new FrameFinding(kind, frames, pattern, repaired));
}
