using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Frames;

/// <summary>In which place of the file each scheduled frame stands; −1 where it stands nowhere.</summary>
internal sealed class FramePlaces
{
    public const int Nowhere = -1;

    private readonly int[] _place;

    private FramePlaces(int[] place) => _place = place;

    public int this[int scheduled] => _place[scheduled];

    /// <summary>Every frame stands where it should, or beside it by the offset of its stretch of the schedule.</summary>
    public static FramePlaces Of(int frames, Func<int, int> offset) =>
        new([.. Enumerable.Range(0, frames).Select(f => f + offset(f) is int p && p >= 0 && p < frames ? p : Nowhere)]);

    /// <summary>The same with some frames elsewhere.</summary>
    public FramePlaces With(params ReadOnlySpan<(int Scheduled, int Place)> changes)
    {
        int[] changed = [.. _place];
        foreach ((int scheduled, int place) in changes)
        {
            changed[scheduled] = place >= 0 && place < changed.Length ? place : Nowhere;
        }

        return new FramePlaces(changed);
    }

    /// <summary>The schedule as the file has it: rows by place, and the groups that are complete and not given up.</summary>
    public Schedule Apply(Schedule schedule, IReadOnlySet<StepGroup> givenUp)
    {
        ScheduledFrame[] rows = [.. schedule.Frames];
        for (int f = 0; f < _place.Length; f++)
        {
            if (_place[f] is int place && place != Nowhere)
            {
                rows[place] = schedule.Frames[f] with { Index = place, TimeS = schedule.Frames[place].TimeS };
            }
        }

        ImmutableArray<StepGroup> groups =
        [
            .. schedule.Groups
                .Where(g => !givenUp.Contains(g) && g.Frames.All(f => _place[f] != Nowhere))
                .Select(g => new StepGroup(g.Role, g.Mode, [.. g.Frames.Select(f => _place[f])])),
        ];
        return new Schedule([.. rows], groups, schedule.TimesAreMeasured);
    }
}
