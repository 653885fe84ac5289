using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Simulation;

/// <summary>How the phase steps that happen differ from those commanded: δ(1 + scale) + offset[step] + jitter.</summary>
/// <param name="LinearScale">Relative error of the stroke, for instance 0.05 for steps 5 % too long.</param>
/// <param name="OffsetRad">Added to each step by its number; empty for none, otherwise one entry a step.</param>
/// <param name="JitterRad">Independent error of every frame, radians r.m.s.</param>
public sealed record StepError(double LinearScale = 0, ImmutableArray<double> OffsetRad = default, double JitterRad = 0)
{
    /// <summary>The step that a frame really had, radians, of whichever arm is stepped.</summary>
    internal double Apply(in ScheduledFrame frame, RandomStreams streams)
    {
        double offset = OffsetRad.IsDefaultOrEmpty ? 0 : OffsetRad[frame.Step];
        double jitter = JitterRad > 0 ? JitterRad * streams.Normal(RandomPurpose.StepJitter, 0, frame.Index) : 0;
        return (frame.PhaseRad * (1 + LinearScale)) + offset + jitter;
    }
}
