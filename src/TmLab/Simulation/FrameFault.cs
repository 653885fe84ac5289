using TmLab.Numerics;

namespace TmLab.Simulation;

/// <summary>What went wrong with a frame between camera and file.</summary>
public enum FrameFaultKind
{
    /// <summary>The frame was lost: all later ones stand one place early, and the last place repeats the last frame.</summary>
    Dropped,

    /// <summary>The frame was delivered twice: all later ones stand one place late, and the last one is missing.</summary>
    Duplicated,

    /// <summary>In the frame's place stands a copy of the one before it; later ones are in their places.</summary>
    Stale,

    /// <summary>The frame and the next one stand in each other's place.</summary>
    Swapped,

    /// <summary>The bench shook during the exposure: the interference is washed out.</summary>
    Shaken,
}

/// <summary>A fault of one frame.</summary>
/// <param name="Kind">What went wrong.</param>
/// <param name="Frame">The frame's scheduled number.</param>
public sealed record FrameFault(FrameFaultKind Kind, int Frame)
{
    /// <summary>For each place in the file, the number of the scheduled frame that stands there.</summary>
    internal static int[] Deliver(int frameCount, IEnumerable<FrameFault> faults)
    {
        var order = Enumerable.Range(0, frameCount).ToList();
        foreach (FrameFault fault in faults)
        {
            Preconditions.InRange(fault.Frame, 0, frameCount - 1);
            fault.Disturb(order);
        }

        return [.. order];
    }

    private void Disturb(List<int> order)
    {
        int place = order.IndexOf(Frame);
        Preconditions.Require(place >= 0, "A fault names a frame that an earlier fault removed.");
        switch (Kind)
        {
            case FrameFaultKind.Dropped:
                order.Add(order[^1]);
                order.RemoveAt(place);
                break;
            case FrameFaultKind.Duplicated:
                order.Insert(place, Frame);
                order.RemoveAt(order.Count - 1);
                break;
            case FrameFaultKind.Stale:
                Preconditions.Require(place > 0, "The first frame has none before it to repeat.");
                order[place] = order[place - 1];
                break;
            case FrameFaultKind.Swapped:
                Preconditions.Require(place + 1 < order.Count, "The last frame has none after it to swap with.");
                (order[place], order[place + 1]) = (order[place + 1], order[place]);
                break;
            default:
                break;
        }
    }
}
