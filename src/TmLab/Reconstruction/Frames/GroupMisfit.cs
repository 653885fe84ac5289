using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction.Frames;

/// <summary>
/// How badly frames fit together as one group at the commanded phases: the squared residual of the least-squares fit and of the relation
/// a = α + β|D|² between background and modulation, over the sample pixels, in units of the fringes' own energy. About
/// σ²/(4|D|²) for the right frames, about ½ for wrong ones.
/// </summary>
internal sealed class GroupMisfit
{
    private const int Rounds = 3;
    private const int FewestPixels = 16;

    // Enough to tell right from wrong; every further pixel costs time.
    private const int MostPixels = 256;

    private readonly ImmutableArray<StepGroup> _groups;
    private readonly ImmutableArray<double> _commandedRad;
    private readonly PixelSample _sample;
    private readonly Dictionary<string, StepFit?> _fits = [];
    private readonly int[] _pixels;
    private readonly double[] _alpha;
    private readonly double[] _beta;
    private readonly double[] _modulation;

    private GroupMisfit(ImmutableArray<StepGroup> groups, ImmutableArray<double> commandedRad, PixelSample sample)
    {
        (_groups, _commandedRad, _sample) = (groups, commandedRad, sample);
        int stride = Math.Max(1, sample.Count / MostPixels);
        _pixels = [.. Enumerable.Range(0, sample.Count / stride).Select(i => i * stride)];
        (_alpha, _beta, _modulation) = (new double[sample.Count], new double[sample.Count], new double[sample.Count]);
    }

    /// <summary>
    /// Learns α, β and the mean |D|² of the pixels from the groups as they stand under the offset at which they fit best; null where that
    /// is not possible.
    /// </summary>
    /// <param name="groups">The groups by their scheduled frames.</param>
    /// <param name="commandedRad">The commanded phase of every scheduled frame.</param>
    /// <param name="sample">Counts by place in the file.</param>
    /// <param name="offsets">Offsets that come into question: what stands at frame f + offset was scheduled for f. The first is the likeliest.</param>
    public static GroupMisfit? Learn(
        ImmutableArray<StepGroup> groups, ImmutableArray<double> commandedRad, PixelSample sample, ImmutableArray<FramePlaces> offsets)
    {
        if (groups.Length < CoherenceModel.FewestGroups)
        {
            return null;
        }

        // Each offset taken for all groups gives a model; the one that fits best overall begins. It is right for most groups where
        // the fault is late, and then sorts the others.
        GroupMisfit? best = null;
        double least = double.PositiveInfinity;
        foreach (FramePlaces places in offsets)
        {
            var candidate = new GroupMisfit(groups, commandedRad, sample);
            if (candidate.LearnFrom([.. groups.Select(_ => places)]) && candidate.Median(places) is double median && median < least)
            {
                (best, least) = (candidate, median);
            }
        }

        for (int round = 0; round < Rounds && best is not null; round++)
        {
            FramePlaces[] chosen = [.. groups.Select(g => offsets.MinBy(o => best.Of(g, o))!)];
            if (!best.LearnFrom(chosen))
            {
                return null;
            }
        }

        return best;
    }

    /// <summary>The misfit of a group under an order of frames; NaN where too few of its frames are there.</summary>
    public double Of(StepGroup group, FramePlaces places)
    {
        int[] there = [.. group.Frames.Where(f => places[f] != FramePlaces.Nowhere)];
        StepFit? fit = there.Length >= 3 ? Fit(there) : null;
        if (fit is null)
        {
            return double.NaN;
        }

        double misfit = 0, energy = 0;
        int used = 0;
        foreach (int p in _pixels)
        {
            (double a, Complex d, double residual) = FitPixel(fit, there, places, p);
            if (double.IsNaN(a) || double.IsNaN(_alpha[p]))
            {
                continue;
            }

            double relation = a - _alpha[p] - (_beta[p] * Square(d));
            misfit += residual + (there.Length * relation * relation);
            energy += 2 * there.Length * _modulation[p];
            used++;
        }

        return used < FewestPixels ? double.NaN : misfit / energy;
    }

    private double Median(FramePlaces places)
    {
        double[] all = [.. _groups.Select(g => Of(g, places)).Where(double.IsFinite).Order()];
        return all.Length == 0 ? double.PositiveInfinity : all[all.Length / 2];
    }

    private bool LearnFrom(FramePlaces[] places)
    {
        int groups = _groups.Length;
        var background = new double[_sample.Count][];
        var modulation = new double[_sample.Count][];
        foreach (int p in _pixels)
        {
            (background[p], modulation[p]) = (new double[groups], new double[groups]);
        }

        for (int k = 0; k < groups; k++)
        {
            int[] frames = [.. _groups[k].Frames];
            StepFit? fit = frames.All(f => places[k][f] != FramePlaces.Nowhere) ? Fit(frames) : null;
            foreach (int p in _pixels)
            {
                (double a, Complex d) = (double.NaN, Complex.NaN);
                if (fit is not null)
                {
                    (a, d, _) = FitPixel(fit, frames, places[k], p);
                }

                (background[p][k], modulation[p][k]) = (a, Square(d));
            }
        }

        int usable = 0;
        foreach (int p in _pixels)
        {
            usable += LearnPixel(p, background[p], modulation[p]) ? 1 : 0;
        }

        return usable >= FewestPixels;
    }

    private bool LearnPixel(int p, double[] background, double[] modulation)
    {
        _modulation[p] = modulation.Where(q => !double.IsNaN(q)).DefaultIfEmpty(0).Average();
        if (_modulation[p] > 0 && TryRelate(background, modulation, out _alpha[p], out _beta[p]))
        {
            return true;
        }

        // Without a usable relation the background's mean must do: at low light its spread is noise.
        double[] known = [.. background.Where(a => !double.IsNaN(a))];
        (_alpha[p], _beta[p]) = known.Length > 0 && _modulation[p] > 0 ? (known.Average(), 0) : (double.NaN, 0);
        return !double.IsNaN(_alpha[p]);
    }

    // Least squares of a = α + β q, as in the coherence model; false where that makes no sense.
    private static bool TryRelate(double[] background, double[] modulation, out double alpha, out double beta)
    {
        int[] known = [.. Enumerable.Range(0, background.Length).Where(k => !double.IsNaN(background[k]))];
        double a = known.Select(k => background[k]).DefaultIfEmpty(0).Average(), q = known.Select(k => modulation[k]).DefaultIfEmpty(0).Average();
        double spread = known.Sum(k => (modulation[k] - q) * (modulation[k] - q));
        beta = known.Sum(k => (modulation[k] - q) * (background[k] - a)) / spread;
        alpha = a - (beta * q);
        return known.Length >= CoherenceModel.FewestGroups && spread > 0 && beta > 0 && alpha > 0;
    }

    private (double Background, Complex Field, double Residual) FitPixel(StepFit fit, int[] frames, FramePlaces places, int p)
    {
        double a = 0, squares = 0;
        Complex d = 0;
        for (int s = 0; s < frames.Length; s++)
        {
            double count = _sample.Frame(places[frames[s]])[p];
            a += fit.Background[s] * count;
            d += fit.Field[s] * count;
        }

        for (int s = 0; frames.Length > 3 && s < frames.Length; s++)
        {
            double rest = _sample.Frame(places[frames[s]])[p] - fit.Model(s, a, d);
            squares += rest * rest;
        }

        return (a, d, squares);
    }

    private StepFit? Fit(int[] frames)
    {
        string key = string.Join(' ', frames.Select(f => BitConverter.DoubleToInt64Bits(_commandedRad[f])));
        if (!_fits.TryGetValue(key, out StepFit? fit))
        {
            fit = StepFit.TryCreate([.. frames.Select(f => _commandedRad[f])]);
            _fits[key] = fit;
        }

        return fit;
    }

    private static double Square(Complex z) => (z.Real * z.Real) + (z.Imaginary * z.Imaginary);
}
