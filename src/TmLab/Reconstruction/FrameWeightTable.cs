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
        ILookup<int, StepGroup> showings = schedule.Groups.ToLookup(g => g.Mode);
        PatternWeights[] patterns =
            [.. Enumerable.Range(0, basis.PatternCount).Select(k => Pattern(basis.PlaneRow(k), k, [.. showings[k]], totalPhaseRad))];
        LostPatterns = [.. Enumerable.Range(0, patterns.Length).Where(k => patterns[k].Frames.IsEmpty)];
        if (basis is HadamardBinaryBasis && !patterns[0].Frames.IsEmpty)
        {
            LostPatterns.ToList().ForEach(k => patterns[k] = HalfOfAllOn(patterns[0], basis.PlaneRow(k), k));
        }

        Weights = new FrameWeights(patterns);
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

    /// <summary>Frames and weights of all patterns.</summary>
    public FrameWeights Weights { get; }

    /// <summary>
    /// Σ w of each plane row: what one count of dark level adds to its column. Zero as long as the laser power is constant, for which
    /// the dark level drops out.
    /// </summary>
    public Complex64[] DarkWeight { get; }

    // An on/off pattern is half of the all-on one plus half of a Hadamard pattern: with nothing known of the latter, half of the former.
    private PatternWeights HalfOfAllOn(PatternWeights allOn, int row, int pattern)
    {
        ColumnVariance[pattern] = ColumnVariance[0] / 4;
        DarkWeight[row] = new Complex64(DarkWeight[allOn.PlaneRow].r / 2, DarkWeight[allOn.PlaneRow].i / 2);
        return new PatternWeights(row, allOn.Frames, [.. allOn.Weights.Select(w => new Complex64(w.r / 2, w.i / 2))]);
    }

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
