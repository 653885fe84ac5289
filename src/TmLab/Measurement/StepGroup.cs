using System.Collections.Immutable;

namespace TmLab.Measurement;

/// <summary>The frames of one pattern at all its phase steps: one demodulated column comes from each group.</summary>
/// <param name="Role">Mode or tracker.</param>
/// <param name="Mode">The pattern's index k.</param>
/// <param name="Frames">The frames' numbers, in the order of recording.</param>
public sealed record StepGroup(FrameRole Role, int Mode, ImmutableArray<int> Frames)
{
    /// <summary>
    /// Collects the groups of a schedule. A mode's frames belong together wherever they stand (a bench may record all modes at
    /// one step, then the next). A tracker is shown many times: a new group begins where a step repeats.
    /// </summary>
    internal static ImmutableArray<StepGroup> Collect(ImmutableArray<ScheduledFrame> frames)
    {
        var groups = new List<(FrameRole Role, int Mode, List<int> Frames, HashSet<int> Steps)>();
        var open = new Dictionary<(FrameRole, int), int>();
        foreach (ScheduledFrame frame in frames.Where(f => f.IsStepped))
        {
            (FrameRole Role, int Mode) key = (frame.Role, frame.Mode);
            bool continues = open.TryGetValue(key, out int at)
                && !(frame.Role == FrameRole.Tracker && groups[at].Steps.Contains(frame.Step));
            if (!continues)
            {
                at = groups.Count;
                open[key] = at;
                groups.Add((key.Role, key.Mode, [], []));
            }

            groups[at].Frames.Add(frame.Index);
            groups[at].Steps.Add(frame.Step);
        }

        return [.. groups.Select(g => new StepGroup(g.Role, g.Mode, [.. g.Frames]))];
    }
}
