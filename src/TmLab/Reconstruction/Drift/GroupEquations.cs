using System.Numerics;
using System.Runtime.CompilerServices;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The normal equations of one group's phases and gains, a register of pixels at a time, each pixel's field eliminated: with A the
/// derivatives of the frames by phases and gains, J those by the field, r the residuals and Q = 1 − J (JᵀJ)⁻¹ Jᵀ,
/// Σ_p w A Q A x = Σ_p w A Q r.
/// </summary>
internal sealed class GroupEquations
{
    private const int FieldIterations = 2;

    private readonly int _steps;
    private readonly double[] _cos;
    private readonly double[] _sin;
    private readonly double[] _gain;
    private readonly Vector<double>[] _counts;
    private readonly Vector<double>[] _model;
    private readonly Vector<double>[] _rest;
    private readonly Vector<double>[] _byPhase;
    private readonly Vector<double>[] _jx;
    private readonly Vector<double>[] _jy;
    private readonly Vector<double>[] _normal;
    private readonly Vector<double>[] _right;
    private Vector<double> _alpha;
    private Vector<double> _beta;
    private Vector<double> _weight;
    private Vector<double> _xx;
    private Vector<double> _xy;
    private Vector<double> _yy;

    public GroupEquations(double[] phaseRad, double[] gain)
    {
        _steps = phaseRad.Length;
        _gain = gain;
        _cos = [.. phaseRad.Select(Math.Cos)];
        _sin = [.. phaseRad.Select(Math.Sin)];
        (_counts, _model, _rest) = (new Vector<double>[_steps], new Vector<double>[_steps], new Vector<double>[_steps]);
        (_byPhase, _jx, _jy) = (new Vector<double>[_steps], new Vector<double>[_steps], new Vector<double>[_steps]);
        _normal = new Vector<double>[4 * _steps * _steps];
        _right = new Vector<double>[2 * _steps];
    }

    /// <summary>How many of the loaded pixels take part.</summary>
    public int PixelsInUse { get; private set; }

    /// <summary>Loads a register of pixels; those without a model or with a saturated frame get no weight.</summary>
    /// <param name="sample">The counts.</param>
    /// <param name="frames">The group's frames.</param>
    /// <param name="pixel">The first pixel.</param>
    /// <param name="model">The pixels' model.</param>
    /// <param name="field">Re D, NaN where a frame is saturated.</param>
    public void Load(PixelSample sample, int[] frames, int pixel, CoherenceModel model, Vector<double> field)
    {
        var weight = new Vector<double>(model.Weight, pixel);
        Vector<long> use = Vector.Equals(field, field) & Vector.GreaterThan(weight, Vector<double>.Zero);
        _weight = Vector.ConditionalSelect(use, weight, Vector<double>.Zero);
        _alpha = new Vector<double>(model.Alpha, pixel);
        _beta = new Vector<double>(model.Beta, pixel);
        PixelsInUse = (int)-Vector.Sum(use);
        for (int s = 0; s < _steps; s++)
        {
            var counts = new Vector<double>(sample.Frame(frames[s])[pixel..]);
            _counts[s] = Vector.ConditionalSelect(use, counts, Vector<double>.Zero);
        }
    }

    /// <summary>Improves the field at fixed phases and adds the pixels' equations; returns their squared residuals.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vector<double> Accumulate(ref Vector<double> re, ref Vector<double> im)
    {
        // Pixels that take no part compute with a harmless field, and keep their own.
        Vector<long> use = Vector.GreaterThan(_weight, Vector<double>.Zero);
        Vector<double> x = Vector.ConditionalSelect(use, re, Vector<double>.One), y = Vector.ConditionalSelect(use, im, Vector<double>.One);
        for (int i = 0; i < FieldIterations; i++)
        {
            Linearise(x, y);
            ImproveField(ref x, ref y);
        }

        Linearise(x, y);
        re = Vector.ConditionalSelect(use, x, re);
        im = Vector.ConditionalSelect(use, y, im);
        return Vector.ConditionalSelect(use, AddEquations(), Vector<double>.Zero);
    }

    /// <summary>Σ w AᵀQ A: phases first, then gains.</summary>
    public double[,] NormalMatrix()
    {
        int unknowns = 2 * _steps;
        var normal = new double[unknowns, unknowns];
        for (int at = 0; at < _normal.Length; at++)
        {
            normal[at / unknowns, at % unknowns] = Vector.Sum(_normal[at]);
        }

        return normal;
    }

    /// <summary>Σ w AᵀQ r.</summary>
    public double[] RightHandSide() => [.. _right.Select(r => Vector.Sum(r))];

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private void Linearise(Vector<double> x, Vector<double> y)
    {
        Vector<double> level = _alpha + (_beta * ((x * x) + (y * y)));
        Vector<double> bx = _beta * x, by = _beta * y;
        (_xx, _xy, _yy) = (Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero);
        for (int s = 0; s < _steps; s++)
        {
            double c = _cos[s], n = _sin[s], g = _gain[s];
            _model[s] = level + (((x * c) - (y * n)) * 2);
            _rest[s] = _counts[s] - (_model[s] * g);
            _byPhase[s] = ((x * n) + (y * c)) * (-2 * g);
            Vector<double> jx = (bx + new Vector<double>(c)) * (2 * g), jy = (by - new Vector<double>(n)) * (2 * g);
            _xx += jx * jx;
            _xy += jx * jy;
            _yy += jy * jy;
            (_jx[s], _jy[s]) = (jx, jy);
        }
    }

    private void ImproveField(ref Vector<double> x, ref Vector<double> y)
    {
        Vector<double> bx = Vector<double>.Zero, by = Vector<double>.Zero;
        for (int s = 0; s < _steps; s++)
        {
            bx += _jx[s] * _rest[s];
            by += _jy[s] * _rest[s];
        }

        Vector<double> determinant = (_xx * _yy) - (_xy * _xy);
        x += ((_yy * bx) - (_xy * by)) / determinant;
        y += ((_xx * by) - (_xy * bx)) / determinant;
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private Vector<double> AddEquations()
    {
        int unknowns = 2 * _steps;
        Vector<double> squares = Vector<double>.Zero;
        Vector<double> scale = _weight / ((_xx * _yy) - (_xy * _xy));
        for (int i = 0; i < _steps; i++)
        {
            squares += _rest[i] * _rest[i];
            Vector<double> ux = ((_yy * _jx[i]) - (_xy * _jy[i])) * scale, uy = ((_xx * _jy[i]) - (_xy * _jx[i])) * scale;
            Vector<double> rightOfRow = Vector<double>.Zero;
            for (int j = 0; j < _steps; j++)
            {
                Vector<double> q = (i == j ? _weight : Vector<double>.Zero) - (ux * _jx[j]) - (uy * _jy[j]);
                Vector<double> phase = q * _byPhase[j], gain = q * _model[j];
                _normal[(i * unknowns) + j] += _byPhase[i] * phase;
                _normal[(i * unknowns) + _steps + j] += _byPhase[i] * gain;
                _normal[((_steps + i) * unknowns) + j] += _model[i] * phase;
                _normal[((_steps + i) * unknowns) + _steps + j] += _model[i] * gain;
                rightOfRow += q * _rest[j];
            }

            _right[i] += _byPhase[i] * rightOfRow;
            _right[_steps + i] += _model[i] * rightOfRow;
        }

        return squares;
    }
}
