using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Matrices;

namespace TmLab.Reconstruction;

/// <summary>
/// For each pattern the frames and complex weights whose sum is its column D[·, k], drift removed and the basis' scale included.
/// A pattern shown several times (a tracker is also a mode) is averaged over all its showings.
/// </summary>
internal sealed class FrameWeightTable
{
    private readonly int[][] _frames;
    private readonly Complex64[][] _weights;

    public FrameWeightTable(Schedule schedule, IPatternBasis basis, ImmutableArray<double> totalPhaseRad)
    {
        _frames = new int[basis.PatternCount][];
        _weights = new Complex64[basis.PatternCount][];
        ColumnVariance = new double[basis.PatternCount];
        foreach (IGrouping<int, StepGroup> showings in schedule.Groups.GroupBy(g => g.Mode))
        {
            Add(showings.Key, [.. showings], basis.InversionScale, totalPhaseRad);
        }
    }

    /// <summary>Variance of D[·, k], before the basis' scale, for unit variance of each frame's counts.</summary>
    public double[] ColumnVariance { get; }

    public ReadOnlySpan<int> Frames(int pattern) => _frames[pattern];

    public ReadOnlySpan<Complex64> Weights(int pattern) => _weights[pattern];

    private void Add(int pattern, StepGroup[] showings, double scale, ImmutableArray<double> theta)
    {
        var frames = new List<int>();
        var weights = new List<Complex64>();
        foreach (StepGroup group in showings)
        {
            StepFit fit = FramePhases.Fit(group, theta);
            frames.AddRange(group.Frames);
            weights.AddRange(fit.Field.Select(w => Complex64.FromComplex(w * scale / showings.Length)));
            ColumnVariance[pattern] += fit.FieldVariance / ((double)showings.Length * showings.Length);
        }

        _frames[pattern] = [.. frames];
        _weights[pattern] = [.. weights];
    }
}
