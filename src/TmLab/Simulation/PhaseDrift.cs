namespace TmLab.Simulation;

/// <summary>One cause of phase drift of the signal arm relative to the reference; a bench sums any number of them.</summary>
public abstract record PhaseDrift
{
    private protected PhaseDrift()
    {
    }

    /// <summary>Adds this cause's phase to each frame's.</summary>
    /// <param name="timeS">The frames' times, seconds, rising.</param>
    /// <param name="streams">Random numbers.</param>
    /// <param name="term">The cause's number, which gives it a stream of its own.</param>
    /// <param name="phaseRad">The sum so far, radians, one entry a frame.</param>
    internal abstract void AddTo(ReadOnlySpan<double> timeS, RandomStreams streams, int term, Span<double> phaseRad);
}

/// <summary>A Wiener process from zero at the first frame: increments are normal with variance rate² Δt.</summary>
/// <param name="RadPerSqrtSecond">The rate, radians after one second, r.m.s.</param>
public sealed record RandomWalkDrift(double RadPerSqrtSecond) : PhaseDrift
{
    /// <inheritdoc/>
    internal override void AddTo(ReadOnlySpan<double> timeS, RandomStreams streams, int term, Span<double> phaseRad)
    {
        double phase = 0;
        for (int frame = 1; frame < timeS.Length; frame++)
        {
            double step = Math.Sqrt(timeS[frame] - timeS[frame - 1]);
            phase += RadPerSqrtSecond * step * streams.Normal(RandomPurpose.PhaseWalk, term, frame);
            phaseRad[frame] += phase;
        }
    }
}

/// <summary>A phase that changes at a constant rate from zero at time zero.</summary>
/// <param name="RadPerSecond">The rate.</param>
public sealed record LinearDrift(double RadPerSecond) : PhaseDrift
{
    /// <inheritdoc/>
    internal override void AddTo(ReadOnlySpan<double> timeS, RandomStreams streams, int term, Span<double> phaseRad)
    {
        for (int frame = 0; frame < timeS.Length; frame++)
        {
            phaseRad[frame] += RadPerSecond * timeS[frame];
        }
    }
}

/// <summary>A vibration or a slow swing: amplitude · sin(2π f t + start).</summary>
/// <param name="AmplitudeRad">The amplitude.</param>
/// <param name="FrequencyHz">The frequency.</param>
/// <param name="StartRad">The phase at time zero.</param>
public sealed record SinusoidalDrift(double AmplitudeRad, double FrequencyHz, double StartRad = 0) : PhaseDrift
{
    /// <inheritdoc/>
    internal override void AddTo(ReadOnlySpan<double> timeS, RandomStreams streams, int term, Span<double> phaseRad)
    {
        for (int frame = 0; frame < timeS.Length; frame++)
        {
            phaseRad[frame] += AmplitudeRad * PortableMath.SinCosTurns((FrequencyHz * timeS[frame]) + (StartRad / (2 * Math.PI))).Sin;
        }
    }
}

/// <summary>A sudden, lasting change of phase, as of a knocked mirror.</summary>
/// <param name="TimeS">When; frames from then on are shifted.</param>
/// <param name="JumpRad">By how much.</param>
public sealed record JumpDrift(double TimeS, double JumpRad) : PhaseDrift
{
    /// <inheritdoc/>
    internal override void AddTo(ReadOnlySpan<double> timeS, RandomStreams streams, int term, Span<double> phaseRad)
    {
        for (int frame = 0; frame < timeS.Length; frame++)
        {
            phaseRad[frame] += timeS[frame] >= TimeS ? JumpRad : 0;
        }
    }
}
