using System.Collections.Immutable;

namespace TmLab.Measurement;

/// <summary>The frames of a measurement in the order of recording, and the phase-stepped groups in it. Immutable.</summary>
public sealed class Schedule
{
    /// <summary>Takes rows in frame order.</summary>
    /// <param name="frames">One entry a frame.</param>
    /// <param name="timesAreMeasured">Whether TimeS is the bench's own clock rather than the frame's number.</param>
    public Schedule(ImmutableArray<ScheduledFrame> frames, bool timesAreMeasured)
    {
        Frames = frames;
        TimesAreMeasured = timesAreMeasured;
        Groups = StepGroup.Collect(frames);
    }

    /// <summary>Takes rows and the groups that may be used, where frames turned out to be wrong.</summary>
    internal Schedule(ImmutableArray<ScheduledFrame> frames, ImmutableArray<StepGroup> groups, bool timesAreMeasured) =>
        (Frames, Groups, TimesAreMeasured) = (frames, groups, timesAreMeasured);

    /// <summary>One entry a frame, in frame order.</summary>
    public ImmutableArray<ScheduledFrame> Frames { get; }

    /// <summary>Whether TimeS is the bench's own clock rather than the frame's number.</summary>
    public bool TimesAreMeasured { get; }

    /// <summary>The phase-stepped groups (one pattern at all its steps), in the order of recording.</summary>
    public ImmutableArray<StepGroup> Groups { get; }

    /// <summary>The groups of trackers, in the order of recording.</summary>
    public IEnumerable<StepGroup> Trackers => Groups.Where(g => g.Role == FrameRole.Tracker);

    /// <summary>The groups of modes, in the order of recording.</summary>
    public IEnumerable<StepGroup> Modes => Groups.Where(g => g.Role == FrameRole.Mode);

    /// <summary>The numbers of the frames with a role.</summary>
    public ImmutableArray<int> FramesWith(FrameRole role) =>
        [.. Frames.Where(f => f.Role == role).Select(f => f.Index)];

    /// <summary>
    /// The short form "mode-major": modes 0 … count−1 in order, each at steps 0 … steps−1 with equal phase steps 2π s / steps, no
    /// other frames, no times.
    /// </summary>
    public static Schedule ModeMajor(int modeCount, int steps) => new(
        [.. Enumerable.Range(0, modeCount * steps).Select(f => EqualStep(f, f / steps, f % steps, steps))], timesAreMeasured: false);

    /// <summary>The short form "step-major": all modes at step 0, then all at step 1, and so on.</summary>
    public static Schedule StepMajor(int modeCount, int steps) => new(
        [.. Enumerable.Range(0, modeCount * steps).Select(f => EqualStep(f, f % modeCount, f / modeCount, steps))], timesAreMeasured: false);

    private static ScheduledFrame EqualStep(int frame, int mode, int step, int steps) =>
        new(frame, FrameRole.Mode, mode, step, 2 * Math.PI * step / steps, frame);
}
