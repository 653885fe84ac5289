using System.Numerics;
using System.Runtime.InteropServices;
using TmLab.Numerics.LinearAlgebra;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The phases of one group's frames relative to each other, from all sample pixels at once: Gauss–Newton on
/// I_s = g_s (α + β|D|² + 2 Re(D e^{iθ_s})) with D free at every pixel, θ_s and the power g_s common to all. (The alternating fit of Wang
/// &amp; Han, Opt. Lett. 29, 1671 (2004) takes background and modulation as equal over the pixels, which speckle is not.)
/// </summary>
internal sealed class GroupFit
{
    private const int FewestPixels = 16;

    private readonly int[] _frames;
    private readonly PixelSample _sample;
    private readonly double[] _re;
    private readonly double[] _im;
    private readonly double[] _background;

    public GroupFit(int[] frames, double[] phaseRad, PixelSample sample)
    {
        _frames = frames;
        _sample = sample;
        (_re, _im, _background) = (new double[sample.Count], new double[sample.Count], new double[sample.Count]);
        PhaseRad = phaseRad;
        Gain = [.. frames.Select(_ => 1.0)];
        Information = new double[frames.Length, frames.Length];
    }

    /// <summary>θ_s, radians, up to a common constant.</summary>
    public double[] PhaseRad { get; private set; }

    /// <summary>g_s, laser power relative to the mean over the measurement.</summary>
    public double[] Gain { get; private set; }

    /// <summary>Mean variance of the gains; NaN before the first step.</summary>
    public double GainVariance { get; private set; } = double.NaN;

    /// <summary>Inverse covariance of the phases, gains and fields marginalised, 1/rad²; the common constant is not determined.</summary>
    public double[,] Information { get; private set; }

    /// <summary>a at the sample pixels; NaN where a frame is saturated.</summary>
    public ReadOnlySpan<double> Background => _background;

    /// <summary>Re D at the sample pixels; NaN where a frame is saturated.</summary>
    public ReadOnlySpan<double> FieldReal => _re;

    /// <summary>Im D at the sample pixels; NaN where a frame is saturated.</summary>
    public ReadOnlySpan<double> FieldImaginary => _im;

    private int Steps => _frames.Length;

    /// <summary>The plain least-squares fit at the present phases, pixel by pixel: a and D. NaN everywhere where the phases do not determine them.</summary>
    public void FitFields()
    {
        StepFit? fit = StepFit.TryCreate(PhaseRad);
        double start = fit is null ? double.NaN : 0;
        _background.AsSpan().Fill(start);
        _re.AsSpan().Fill(start);
        _im.AsSpan().Fill(start);
        for (int s = 0; fit is not null && s < Steps; s++)
        {
            ReadOnlySpan<double> counts = _sample.Frame(_frames[s]);
            AddScaled(_background, counts, fit.Background[s] / Gain[s]);
            AddScaled(_re, counts, fit.Field[s].Real / Gain[s]);
            AddScaled(_im, counts, fit.Field[s].Imaginary / Gain[s]);
        }
    }

    /// <summary>One Gauss–Newton step on phases and gains; writes each pixel's squared residual, 0 where a pixel took no part.</summary>
    /// <returns>The largest change of a phase, radians.</returns>
    public double Improve(CoherenceModel model, double gainSpread, Span<double> residual)
    {
        var equations = new GroupEquations(PhaseRad, Gain);
        int used = 0;
        for (int p = 0; p < _re.Length; p += Vector<double>.Count)
        {
            var re = new Vector<double>(_re, p);
            var im = new Vector<double>(_im, p);
            equations.Load(_sample, _frames, p, model, re);
            Vector<double> squares = equations.Accumulate(ref re, ref im);
            re.CopyTo(_re, p);
            im.CopyTo(_im, p);
            squares.CopyTo(residual[p..]);
            used += equations.PixelsInUse;
        }

        // A group that is saturated nearly everywhere says nothing: its phases stay, and its information is nought.
        return used < FewestPixels ? 0 : Solve(equations.NormalMatrix(), equations.RightHandSide(), gainSpread);
    }

    private static void AddScaled(Span<double> target, ReadOnlySpan<double> values, double factor)
    {
        Span<Vector<double>> y = MemoryMarshal.Cast<double, Vector<double>>(target);
        ReadOnlySpan<Vector<double>> x = MemoryMarshal.Cast<double, Vector<double>>(values);
        for (int v = 0; v < y.Length; v++)
        {
            y[v] += x[v] * factor;
        }
    }

    // The gains get a prior of their known spread; the phases' common constant, which nothing determines, is held.
    private double Solve(double[,] normal, double[] right, double gainSpread)
    {
        double prior = 1 / (gainSpread * gainSpread);
        for (int s = 0; s < Steps; s++)
        {
            normal[Steps + s, Steps + s] += prior;
            right[Steps + s] += prior * (1 - Gain[s]);
        }

        Information = SmallSymmetric.Marginal(normal, Steps);
        double hold = Enumerable.Range(0, Steps).Sum(s => normal[s, s]) / Steps;
        for (int i = 0; i < Steps; i++)
        {
            for (int j = 0; j < Steps; j++)
            {
                normal[i, j] += hold;
            }
        }

        double[,] covariance = SmallSymmetric.Inverse(normal);
        GainVariance = Enumerable.Range(Steps, Steps).Average(s => covariance[s, s]);
        double[] step = SmallSymmetric.Solve(normal, right);
        PhaseRad = [.. PhaseRad.Select((t, s) => t + step[s])];
        Gain = [.. Gain.Select((g, s) => g + step[Steps + s])];
        return step.Take(Steps).Max(Math.Abs);
    }
}
