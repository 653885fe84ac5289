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

    private readonly ImmutableArray<double> _gain;

    public FrameWeightTable(Schedule schedule, IPatternBasis basis, ImmutableArray<double> totalPhaseRad, ImmutableArray<double> frameGain)
    {
        _gain = frameGain;
        DarkWeight = new Complex64[basis.PatternCount];
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

    /// <summary>
    /// Σ w of each pattern: what one count of dark level adds to its column. Zero as long as the laser power is constant, for which
    /// the dark level drops out.
    /// </summary>
    public Complex64[] DarkWeight { get; }

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
            weights.AddRange(group.Frames.Select((f, s) => Complex64.FromComplex(fit.Field[s] * scale / showings.Length / _gain[f])));
            ColumnVariance[pattern] += fit.FieldVariance / ((double)showings.Length * showings.Length);
        }

        _frames[pattern] = [.. frames];
        _weights[pattern] = [.. weights];
        DarkWeight[pattern] = frames.All(f => _gain[f] == 1)
            ? default
            : new Complex64(weights.Sum(w => w.r), weights.Sum(w => w.i));
    }
}
