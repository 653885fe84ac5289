using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;

namespace TmLab.Reconstruction;

/// <summary>
/// For each pattern the frames and complex weights whose sum is its column D[·, k], drift removed and the basis' scale included.
/// A pattern shown several times (a tracker is also a mode) is averaged over all its showings.
/// </summary>
internal sealed class FrameWeightTable
{
    private readonly ImmutableArray<double> _gain;
    private readonly double _scale;

    public FrameWeightTable(Schedule schedule, IPatternBasis basis, ImmutableArray<double> totalPhaseRad, ImmutableArray<double> frameGain)
    {
        _gain = frameGain;
        _scale = basis.InversionScale;
        DarkWeight = new Complex64[basis.PatternCount];
        ColumnVariance = new double[basis.PatternCount];
        Weights = new FrameWeights(
            [.. schedule.Groups.GroupBy(g => g.Mode).Select(showings => Pattern(basis.PlaneRow(showings.Key), showings.Key, [.. showings], totalPhaseRad))]);
    }

    /// <summary>Variance of D[·, k], before the basis' scale, for unit variance of each frame's counts.</summary>
    public double[] ColumnVariance { get; }

    /// <summary>Frames and weights of all patterns.</summary>
    public FrameWeights Weights { get; }

    /// <summary>
    /// Σ w of each plane row: what one count of dark level adds to its column. Zero as long as the laser power is constant, for which
    /// the dark level drops out.
    /// </summary>
    public Complex64[] DarkWeight { get; }

    private PatternWeights Pattern(int row, int pattern, StepGroup[] showings, ImmutableArray<double> theta)
    {
        var frames = ImmutableArray.CreateBuilder<int>();
        var weights = ImmutableArray.CreateBuilder<Complex64>();
        foreach (StepGroup group in showings)
        {
            StepFit fit = FramePhases.Fit(group, theta);
            frames.AddRange(group.Frames);
            weights.AddRange(group.Frames.Select((f, s) => Complex64.FromComplex(fit.Field[s] * _scale / showings.Length / _gain[f])));
            ColumnVariance[pattern] += fit.FieldVariance / ((double)showings.Length * showings.Length);
        }

        if (frames.Any(f => _gain[f] != 1))
        {
            DarkWeight[row] = new Complex64(weights.Sum(w => w.r), weights.Sum(w => w.i));
        }

        return new PatternWeights(row, frames.ToImmutable(), weights.ToImmutable());
    }
}
