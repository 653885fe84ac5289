using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Reconstruction;

namespace TmLab.Benchmarks;

/// <summary>Hadamard modes at four equal steps, without drift: the basis and the frames' weights.</summary>
internal sealed class KernelCase
{
    public KernelCase(int modes, int steps)
    {
        Basis = new HadamardBasis(modes, HadamardOrdering.Natural);
        var schedule = Schedule.ModeMajor(modes, steps);
        ImmutableArray<double> theta = [.. schedule.Frames.Select(f => f.PhaseRad)];
        Weights = new FrameWeightTable(schedule, Basis, theta, [.. theta.Select(_ => 1.0)]);
        FrameCount = schedule.Frames.Length;
    }

    public IPatternBasis Basis { get; }

    public FrameWeightTable Weights { get; }

    public int FrameCount { get; }
}
