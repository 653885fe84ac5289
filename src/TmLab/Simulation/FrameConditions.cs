using TmLab.Measurement;

namespace TmLab.Simulation;

/// <summary>Everything that changes from one scheduled frame to the next, by scheduled number.</summary>
internal sealed class FrameConditions
{
    public FrameConditions(BenchSettings settings, Schedule schedule)
    {
        var streams = new RandomStreams(settings.Seed);
        double[] timeS = [.. schedule.Frames.Select(f => f.TimeS)];
        DriftPhaseRad = new double[timeS.Length];
        for (int term = 0; term < settings.PhaseDrift.Length; term++)
        {
            settings.PhaseDrift[term].AddTo(timeS, streams, term, DriftPhaseRad);
        }

        Power = settings.Power.Evaluate(timeS, streams);
        StepPhaseRad = [.. schedule.Frames.Select(f => f.IsStepped ? settings.Steps.Apply(f, streams) : double.NaN)];
        FieldCorrelation = [.. timeS.Select(t => double.IsFinite(settings.DecorrelationTimeS)
            ? PortableMath.Exp(-Math.Min((t - timeS[0]) / settings.DecorrelationTimeS, 700)) : 1)];
        Contrast = [.. Enumerable.Repeat(1.0, timeS.Length)];
        foreach (FrameFault fault in settings.Faults.Where(f => f.Kind == FrameFaultKind.Shaken))
        {
            Contrast[fault.Frame] = 0;
        }
    }

    /// <summary>Drift phase of the signal arm, radians.</summary>
    public double[] DriftPhaseRad { get; }

    /// <summary>The step that the stepped arm really had, radians; NaN where the role has none.</summary>
    public double[] StepPhaseRad { get; }

    /// <summary>Laser power; 1 at the start.</summary>
    public double[] Power { get; }

    /// <summary>Share of the starting matrix' field that is left.</summary>
    public double[] FieldCorrelation { get; }

    /// <summary>Share of the interference that the exposure keeps: 1, or 0 in a shaken frame.</summary>
    public double[] Contrast { get; }
}
