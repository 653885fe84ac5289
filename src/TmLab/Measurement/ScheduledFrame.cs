namespace TmLab.Measurement;

/// <summary>One row of the schedule.</summary>
/// <param name="Index">The frame's number, from 0 in the order of recording.</param>
/// <param name="Role">What the frame shows.</param>
/// <param name="Mode">The pattern's index k; −1 where the role has none.</param>
/// <param name="Step">The step's number 0 … S−1; −1 where the role has none.</param>
/// <param name="PhaseRad">The commanded phase step as the bench gave it, radians (of whichever arm is stepped); NaN where the role has none.</param>
/// <param name="TimeS">Seconds from the start; where the bench recorded no times, the frame's number.</param>
public readonly record struct ScheduledFrame(int Index, FrameRole Role, int Mode, int Step, double PhaseRad, double TimeS)
{
    /// <summary>Whether the frame belongs to a phase-stepped group (mode or tracker).</summary>
    public bool IsStepped => Role is FrameRole.Mode or FrameRole.Tracker;
}
