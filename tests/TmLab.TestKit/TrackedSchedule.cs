using TmLab.Measurement;

namespace TmLab.TestKit;

/// <summary>Schedules with a tracker (pattern 0) before every few modes and at the end, equal steps, one frame a second.</summary>
public static class TrackedSchedule
{
    /// <summary>Makes one.</summary>
    /// <param name="modes">Number of patterns.</param>
    /// <param name="steps">Steps a pattern.</param>
    /// <param name="every">Modes from one tracker to the next.</param>
    public static Schedule Make(int modes, int steps, int every)
    {
        var frames = new List<ScheduledFrame>();
        void Show(FrameRole role, int mode)
        {
            for (int s = 0; s < steps; s++)
            {
                frames.Add(new ScheduledFrame(frames.Count, role, mode, s, 2 * Math.PI * s / steps, frames.Count));
            }
        }

        for (int mode = 0; mode < modes; mode++)
        {
            if (mode % every == 0)
            {
                Show(FrameRole.Tracker, 0);
            }

            Show(FrameRole.Mode, mode);
        }

        Show(FrameRole.Tracker, 0);
        return new Schedule([.. frames], timesAreMeasured: true);
    }
}
