using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Frames;

/// <summary>The schedule as the frames turned out to follow it.</summary>
/// <param name="AsPlanned">The schedule that was to be followed.</param>
/// <param name="Schedule">Rows by place in the file, and the groups that may be used.</param>
/// <param name="Findings">What was wrong.</param>
/// <param name="Misfit">How well frames fit as a group; null where it could not be learned.</param>
/// <param name="Places">Where the scheduled frames stand.</param>
internal sealed record FrameSearchOutcome(
    Schedule AsPlanned, Schedule Schedule, ImmutableArray<FrameFinding> Findings, GroupMisfit? Misfit, FramePlaces Places)
{
    // Without the one wrong frame the others must fit this much better than without any other.
    private const double LoneRatio = 0.4;

    /// <summary>The schedule without some of its groups, for findings that name them.</summary>
    public FrameSearchOutcome Without(ImmutableArray<(StepGroup Group, FrameFinding Finding)> wrong)
    {
        HashSet<StepGroup> groups = [.. wrong.Select(w => w.Group)];
        var schedule = new Schedule(Schedule.Frames, [.. Schedule.Groups.Where(g => !groups.Contains(g))], Schedule.TimesAreMeasured);
        return this with { Schedule = schedule, Findings = [.. Findings.Concat(wrong.Select(w => w.Finding)).OrderBy(f => f.Frames[0])] };
    }

    /// <summary>The frame without which the others of a group fit; null where there is none, or not only one.</summary>
    /// <param name="group">A group of <see cref="Schedule"/>.</param>
    public int? LoneFrame(StepGroup group)
    {
        StepGroup? planned = AsPlanned.Groups.FirstOrDefault(g => g.Frames.Select(f => Places[f]).SequenceEqual(group.Frames));
        if (planned is null || Misfit is null || group.Frames.Length < 4)
        {
            return null;
        }

        (int Frame, double Left)[] all =
        [
            .. planned.Frames.Select(f => (Places[f], Misfit.Of(planned, Places.With((f, FramePlaces.Nowhere)))))
                .Where(c => double.IsFinite(c.Item2)).OrderBy(c => c.Item2),
        ];
        return all.Length > 1 && all[0].Left < LoneRatio * all[1].Left ? all[0].Frame : null;
    }
}
