namespace TmLab.Simulation;

/// <summary>How the laser's power changes; everything relative to the power at the first frame. Power never falls below zero.</summary>
/// <param name="LinearPerSecond">Steady change a second.</param>
/// <param name="WalkPerSqrtSecond">Random walk, r.m.s. after one second.</param>
/// <param name="FrameNoise">Independent change from frame to frame, r.m.s.</param>
public sealed record PowerDrift(double LinearPerSecond = 0, double WalkPerSqrtSecond = 0, double FrameNoise = 0)
{
    /// <summary>The power at each frame.</summary>
    internal double[] Evaluate(ReadOnlySpan<double> timeS, RandomStreams streams)
    {
        double[] power = new double[timeS.Length];
        double walk = 0;
        for (int frame = 0; frame < power.Length; frame++)
        {
            double interval = frame == 0 ? 0 : timeS[frame] - timeS[frame - 1];
            walk += WalkPerSqrtSecond * Math.Sqrt(interval) * streams.Normal(RandomPurpose.PowerWalk, 0, frame);
            double noise = FrameNoise * streams.Normal(RandomPurpose.PowerNoise, 0, frame);
            power[frame] = Math.Max(0, 1 + (LinearPerSecond * (timeS[frame] - timeS[0])) + walk + noise);
        }

        return power;
    }
}
