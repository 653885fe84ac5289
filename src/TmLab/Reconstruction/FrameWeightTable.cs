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
        _frames = [.. Enumerable.Range(0, basis.PatternCount).Select(_ => Array.Empty<int>())];
        _weights = [.. Enumerable.Range(0, basis.PatternCount).Select(_ => Array.Empty<Complex64>())];
        ColumnVariance = new double[basis.PatternCount];
        foreach (IGrouping<int, StepGroup> showings in schedule.Groups.GroupBy(g => g.Mode))
        {
            Add(showings.Key, [.. showings], basis.InversionScale, totalPhaseRad);
        }

        LostPatterns = [.. Enumerable.Range(0, basis.PatternCount).Where(k => _frames[k].Length == 0)];
        if (basis is HadamardBinaryBasis && _frames[0].Length > 0)
        {
            LostPatterns.ToList().ForEach(PutHalfOfAllOn);
        }
    }

    /// <summary>Patterns without a usable showing: nothing stands in their columns, or the best guess.</summary>
    public ImmutableArray<int> LostPatterns { get; }

    /// <summary>The share of a lost column's energy that is wrong: half where half the light of pattern 0 stands in for an on/off pattern.</summary>
    public static double LostShare(IPatternBasis basis) => basis switch
    {
        HadamardBinaryBasis => 0.5,
        PixelBasis => 0,
        _ => 1,
    };

    /// <summary>Variance of D[·, k], before the basis' scale, for unit variance of each frame's counts.</summary>
    public double[] ColumnVariance { get; }

    /// <summary>
    /// Σ w of each pattern: what one count of dark level adds to its column. Zero as long as the laser power is constant, for which
    /// the dark level drops out.
    /// </summary>
    public Complex64[] DarkWeight { get; }

    public ReadOnlySpan<int> Frames(int pattern) => _frames[pattern];

    public ReadOnlySpan<Complex64> Weights(int pattern) => _weights[pattern];

    // An on/off pattern is half of the all-on one plus half of a Hadamard pattern: with nothing known of the latter, half of the former.
    private void PutHalfOfAllOn(int pattern)
    {
        _frames[pattern] = _frames[0];
        _weights[pattern] = [.. _weights[0].Select(w => new Complex64(w.r / 2, w.i / 2))];
        ColumnVariance[pattern] = ColumnVariance[0] / 4;
        DarkWeight[pattern] = new Complex64(DarkWeight[0].r / 2, DarkWeight[0].i / 2);
    }

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
