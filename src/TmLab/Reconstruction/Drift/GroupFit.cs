using System.Numerics;
using TmLab.Numerics.LinearAlgebra;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The phases of one group's frames relative to each other, from all sample pixels at once: Gauss–Newton on
/// I_s = g_s (α + β|D|² + 2 Re(D e^{iθ_s})) with D free at every pixel, θ_s and the power g_s common to all. (The alternating fit of Wang
/// &amp; Han, Opt. Lett. 29, 1671 (2004) takes background and modulation as equal over the pixels, which speckle is not.)
/// </summary>
internal sealed class GroupFit
{
    private const int PixelIterations = 2;
    private const int FewestPixels = 16;

    private readonly int[] _frames;
    private readonly PixelSample _sample;
    private readonly Complex[] _field;

    public GroupFit(int[] frames, double[] phaseRad, PixelSample sample)
    {
        _frames = frames;
        _sample = sample;
        _field = new Complex[sample.Count];
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

    /// <summary>D at the sample pixels; NaN where a frame is saturated.</summary>
    public ReadOnlySpan<Complex> Field => _field;

    private int Steps => _frames.Length;

    /// <summary>The plain least-squares fit at the present phases, pixel by pixel: D, and a for the coherence model.</summary>
    /// <returns>Whether the phases determine the field.</returns>
    public bool FitFields(Span<double> background)
    {
        StepFit? fit = StepFit.TryCreate(PhaseRad);
        for (int p = 0; p < _field.Length; p++)
        {
            Complex field = 0;
            double a = 0;
            for (int s = 0; fit is not null && s < Steps; s++)
            {
                double count = _sample.Frame(_frames[s])[p] / Gain[s];
                a += fit.Background[s] * count;
                field += fit.Field[s] * count;
            }

            background[p] = a;
            _field[p] = field;
        }

        return fit is not null;
    }

    /// <summary>One Gauss–Newton step on phases and gains; adds each pixel's squared residual to <paramref name="residual"/>.</summary>
    /// <returns>The largest change of a phase, radians.</returns>
    public double Improve(CoherenceModel model, double gainSpread, Span<double> residual)
    {
        var normal = new double[2 * Steps, 2 * Steps];
        var right = new double[2 * Steps];
        var pixel = new PixelEquations(Steps, PhaseRad, Gain);
        int used = 0;
        for (int p = 0; p < _field.Length; p++)
        {
            if (!double.IsFinite(model.Variance[p]) || Complex.IsNaN(_field[p]))
            {
                continue;
            }

            pixel.Load(_sample, _frames, p, model.Alpha[p], model.Beta[p]);
            for (int i = 0; i < PixelIterations; i++)
            {
                _field[p] += pixel.FieldStep(_field[p]);
            }

            residual[p] += pixel.Accumulate(_field[p], 1 / model.Variance[p], normal, right);
            used++;
        }

        // A group that is saturated nearly everywhere says nothing: its phases stay, and its information is nought.
        return used < FewestPixels ? 0 : Solve(normal, right, gainSpread);
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

    /// <summary>The equations of one pixel, its field eliminated.</summary>
    private sealed class PixelEquations
    {
        private readonly int _steps;
        private readonly double[] _cos;
        private readonly double[] _sin;
        private readonly double[] _gain;
        private readonly double[] _counts;
        private readonly double[] _model;
        private readonly double[] _rest;
        private readonly double[] _jx;
        private readonly double[] _jy;
        private readonly double[] _byPhase;
        private double _alpha;
        private double _beta;
        private double _xx;
        private double _xy;
        private double _yy;

        public PixelEquations(int steps, double[] phase, double[] gain)
        {
            _steps = steps;
            _gain = gain;
            _cos = [.. phase.Select(Math.Cos)];
            _sin = [.. phase.Select(Math.Sin)];
            (_counts, _model, _rest) = (new double[steps], new double[steps], new double[steps]);
            (_jx, _jy, _byPhase) = (new double[steps], new double[steps], new double[steps]);
        }

        public void Load(PixelSample sample, int[] frames, int pixel, double alpha, double beta)
        {
            (_alpha, _beta) = (alpha, beta);
            for (int s = 0; s < _steps; s++)
            {
                _counts[s] = sample.Frame(frames[s])[pixel];
            }
        }

        /// <summary>The least-squares step of D at fixed phases.</summary>
        public Complex FieldStep(Complex field)
        {
            Linearise(field);
            double bx = 0, by = 0;
            for (int s = 0; s < _steps; s++)
            {
                bx += _jx[s] * _rest[s];
                by += _jy[s] * _rest[s];
            }

            double determinant = (_xx * _yy) - (_xy * _xy);
            return new Complex(((_yy * bx) - (_xy * by)) / determinant, ((_xx * by) - (_xy * bx)) / determinant);
        }

        /// <summary>Adds A†Q A and A†Q r, with A the derivatives by phases and gains and Q what is orthogonal to the field's.</summary>
        public double Accumulate(Complex field, double weight, double[,] normal, double[] right)
        {
            Linearise(field);
            double determinant = (_xx * _yy) - (_xy * _xy);
            double squares = 0;
            for (int i = 0; i < _steps; i++)
            {
                squares += _rest[i] * _rest[i];
                double ux = ((_yy * _jx[i]) - (_xy * _jy[i])) / determinant;
                double uy = ((_xx * _jy[i]) - (_xy * _jx[i])) / determinant;
                for (int j = 0; j < _steps; j++)
                {
                    double q = (i == j ? 1 : 0) - (ux * _jx[j]) - (uy * _jy[j]);
                    double weighted = weight * q;
                    normal[i, j] += _byPhase[i] * weighted * _byPhase[j];
                    normal[i, _steps + j] += _byPhase[i] * weighted * _model[j];
                    normal[_steps + i, j] += _model[i] * weighted * _byPhase[j];
                    normal[_steps + i, _steps + j] += _model[i] * weighted * _model[j];
                    right[i] += _byPhase[i] * weighted * _rest[j];
                    right[_steps + i] += _model[i] * weighted * _rest[j];
                }
            }

            return squares;
        }

        private void Linearise(Complex field)
        {
            (double x, double y) = (field.Real, field.Imaginary);
            double level = _alpha + (_beta * ((x * x) + (y * y)));
            (_xx, _xy, _yy) = (0, 0, 0);
            for (int s = 0; s < _steps; s++)
            {
                _model[s] = level + (2 * ((x * _cos[s]) - (y * _sin[s])));
                _rest[s] = _counts[s] - (_gain[s] * _model[s]);
                _byPhase[s] = -2 * _gain[s] * ((x * _sin[s]) + (y * _cos[s]));
                _jx[s] = 2 * _gain[s] * ((_beta * x) + _cos[s]);
                _jy[s] = 2 * _gain[s] * ((_beta * y) - _sin[s]);
                _xx += _jx[s] * _jx[s];
                _xy += _jx[s] * _jy[s];
                _yy += _jy[s] * _jy[s];
            }
        }
    }
}
