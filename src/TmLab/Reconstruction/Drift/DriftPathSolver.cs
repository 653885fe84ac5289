using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Statistics;

namespace TmLab.Reconstruction.Drift;

/// <summary>
/// The most probable drift path: a random walk φ over the frames (variance q Δt from one frame to the next), the phases inside the
/// groups with their information matrices, the trackers that pin it absolutely, and a systematic error b_s of each phase step. All
/// is Gaussian, so one sparse linear system gives the path that a Rauch–Tung–Striebel smoother (AIAA J. 3, 1445 (1965)) would, whatever
/// the order in which modes and steps were recorded.
/// </summary>
internal sealed class DriftPathSolver
{
    // Systematic step errors are expected to be of this order, radians: a weak prior.
    private const double StepErrorSpreadRad = 0.5;
    private const ulong DrawSeed = 20;

    // The rate from a few tracker gaps must exceed that from all groups by so many standard deviations to be believed.
    private const double TrackerSignificance = 3;

    private readonly Schedule _schedule;
    private readonly GroupPhases _phases;
    private readonly ImmutableArray<double> _commandedRad;
    private readonly ImmutableArray<TrackerPin> _pins;
    private readonly int[] _frames;
    private readonly int[] _place;
    private readonly int _steps;
    private BandedCholesky? _factor;
    private Border? _border;

    public DriftPathSolver(Schedule schedule, GroupPhases phases, ImmutableArray<double> commandedRad, ImmutableArray<TrackerPin> pins)
    {
        (_schedule, _phases, _commandedRad, _pins) = (schedule, phases, commandedRad, pins);
        _frames = [.. schedule.Frames.Where(f => f.IsStepped).OrderBy(f => f.TimeS).Select(f => f.Index)];
        _place = new int[schedule.Frames.Length];
        for (int i = 0; i < _frames.Length; i++)
        {
            _place[_frames[i]] = i;
        }

        _steps = schedule.Frames.Where(f => f.IsStepped).Max(f => f.Step) + 1;
    }

    /// <summary>Drift at every frame, its standard deviation and the step errors, for a walk of variance rate q, rad²/s.</summary>
    public DriftPath Solve(double walkRate)
    {
        var normal = new SparseNormalEquations(_frames.Length);
        var right = new double[_frames.Length];
        var border = new Border(_steps, _frames.Length);
        AddWalk(normal, walkRate);
        for (int k = 0; k < _phases.Groups.Length; k++)
        {
            AddGroup(normal, right, border, k, _phases.Fits[k].Information, offset: 0);
        }

        foreach (TrackerPin pin in _pins)
        {
            AddGroup(normal, right, border, pin.Group, PinInformation(pin), pin.OffsetRad);
        }

        // The absolute phase means nothing: the first frame is held near zero where no tracker does.
        normal.Add(0, 0, _pins.IsEmpty ? 1e6 : 1e-6);
        BandedCholesky factor = normal.Factor();
        (_factor, _border) = (factor, border);
        (double[] path, double[] errors) = border.Solve(factor, right, StepErrorSpreadRad);
        return new DriftPath(OverAllFrames(path), OverAllFrames([.. factor.InverseDiagonal().Select(Math.Sqrt)]), [.. errors], walkRate);
    }

    /// <summary>
    /// Draws from the posterior distribution about the path just solved for: the error of every frame's phase, path and step error
    /// together, and the error of each step alone, radians. Deterministic.
    /// </summary>
    public IEnumerable<(double[] FrameErrorRad, double[] StepErrorRad)> DrawErrors(int count)
    {
        for (int draw = 0; draw < count; draw++)
        {
            var random = new SeededRandom(DrawSeed, (ulong)draw);
            double[] white = [.. Enumerable.Range(0, _frames.Length).Select(_ => random.NextNormal())];
            (double[] path, double[] steps) = _border!.Draw(_factor!.Colour(white), random);
            var errors = new double[_schedule.Frames.Length];
            foreach (ScheduledFrame frame in _schedule.Frames.Where(f => f.IsStepped))
            {
                errors[frame.Index] = path[_place[frame.Index]] + steps[frame.Step];
            }

            yield return (errors, steps);
        }
    }

    /// <summary>
    /// The walk's variance rate, rad²/s, from the increments from step to step inside the groups, what they have in common taken off,
    /// or that from the trackers where it is significantly larger, the drift then being no plain walk.
    /// </summary>
    public double EstimateWalkRate()
    {
        double inside = WalkRateInsideGroups(), trackers = TrackerRate();
        // Quantile of χ²_n/n (Wilson & Hilferty, Proc. Natl. Acad. Sci. 17, 684 (1931)).
        double spread = 2.0 / (9 * Math.Max(1, _pins.Length - 1));
        double limit = inside * Math.Pow(1 - spread + (TrackerSignificance * Math.Sqrt(spread)), 3);
        return Math.Max(trackers > limit ? trackers : inside, 1e-12);
    }

    /// <summary>The variance rate, rad²/s, that the groups alone show; not below zero.</summary>
    public double WalkRateInsideGroups() => WalkRate.Estimate([.. Increments()]);

    private void AddWalk(SparseNormalEquations normal, double walkRate)
    {
        for (int i = 1; i < _frames.Length; i++)
        {
            double gap = _schedule.Frames[_frames[i]].TimeS - _schedule.Frames[_frames[i - 1]].TimeS;
            double weight = 1 / (walkRate * Math.Max(gap, 1e-9));
            normal.Add(i, i, weight);
            normal.Add(i - 1, i - 1, weight);
            normal.Add(i, i - 1, -weight);
        }
    }

    private void AddGroup(SparseNormalEquations normal, double[] right, Border border, int group, double[,] information, double offset)
    {
        ImmutableArray<int> frames = _phases.Groups[group].Frames;
        double[] observed = [.. frames.Select((f, s) => _phases.Fits[group].PhaseRad[s] - _commandedRad[f] + offset)];
        for (int i = 0; i < frames.Length; i++)
        {
            int row = _place[frames[i]], stepOfRow = _schedule.Frames[frames[i]].Step;
            for (int j = 0; j < frames.Length; j++)
            {
                double value = information[i, j];
                if (j <= i)
                {
                    normal.Add(row, _place[frames[j]], value);
                }

                right[row] += value * observed[j];
                border.Add(row, stepOfRow, _schedule.Frames[frames[j]].Step, value, observed[j]);
            }
        }
    }

    // The mean over the group's frames is known with the pin's variance.
    private double[,] PinInformation(TrackerPin pin)
    {
        int steps = _phases.Groups[pin.Group].Frames.Length;
        var information = new double[steps, steps];
        for (int i = 0; i < steps; i++)
        {
            for (int j = 0; j < steps; j++)
            {
                information[i, j] = 1 / (pin.VarianceRad2 * steps * steps);
            }
        }

        return information;
    }

    private IEnumerable<GroupIncrements> Increments()
    {
        for (int k = 0; k < _phases.Groups.Length; k++)
        {
            if (_phases.Fits[k].Information[0, 0] > 0)
            {
                yield return IncrementsOf(k);
            }
        }
    }

    private GroupIncrements IncrementsOf(int group)
    {
        ImmutableArray<int> frames = _phases.Groups[group].Frames;
        double[] observed = [.. frames.Select((f, s) => _phases.Fits[group].PhaseRad[s] - _commandedRad[f])];
        double[,] absolute = Covariance(_phases.Fits[group].Information);
        int n = frames.Length - 1;
        var covariance = new double[n, n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                covariance[i, j] = absolute[i + 1, j + 1] - absolute[i + 1, j] - absolute[i, j + 1] + absolute[i, j];
            }
        }

        return new GroupIncrements(
            [.. Enumerable.Range(1, n).Select(s => observed[s] - observed[s - 1])],
            covariance,
            [.. Enumerable.Range(1, n).Select(s => _schedule.Frames[frames[s]].TimeS - _schedule.Frames[frames[s - 1]].TimeS)]);
    }

    // The common constant is not determined; holding it leaves the variance of differences as it is.
    private static double[,] Covariance(double[,] information)
    {
        int n = information.GetLength(0);
        double hold = Enumerable.Range(0, n).Sum(s => information[s, s]) / n;
        var held = (double[,])information.Clone();
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                held[i, j] += hold;
            }
        }

        return SmallSymmetric.Inverse(held);
    }

    private double TrackerRate()
    {
        double moved = 0, time = 0;
        for (int k = 1; k < _pins.Length; k++)
        {
            double change = _pins[k].OffsetRad - _pins[k - 1].OffsetRad;
            moved += (change * change) - _pins[k].VarianceRad2;
            time += _pins[k].TimeS - _pins[k - 1].TimeS;
        }

        return time > 0 ? moved / time : 0;
    }

    // Frames without a step take their neighbours' mean in time.
    private ImmutableArray<double> OverAllFrames(double[] values)
    {
        double[] times = [.. _frames.Select(f => _schedule.Frames[f].TimeS)];
        return [.. _schedule.Frames.Select(f => f.IsStepped ? values[_place[f.Index]] : TimeInterpolation.Linear(times, values, f.TimeS))];
    }

    /// <summary>The step errors b_1 … b_{S−1} as extra unknowns beside the sparse system; b_0 is zero by definition.</summary>
    private sealed class Border(int steps, int frames)
    {
        private readonly double[][] _columns = [.. Enumerable.Range(0, steps).Select(_ => new double[frames])];
        private readonly double[,] _corner = new double[steps, steps];
        private readonly double[] _right = new double[steps];
        private double[][] _solved = [];
        private double[,] _information = new double[0, 0];

        public void Add(int row, int stepOfRow, int stepOfColumn, double value, double observed)
        {
            _columns[stepOfColumn][row] += value;
            _corner[stepOfRow, stepOfColumn] += value;
            _right[stepOfRow] += value * observed;
        }

        /// <summary>Eliminates the path: (C − BᵀA⁻¹B) b = r_b − BᵀA⁻¹ r, then φ = A⁻¹(r − B b).</summary>
        public (double[] Path, double[] StepErrors) Solve(BandedCholesky factor, double[] right, double spread)
        {
            double[] free = factor.Solve(right);
            double[][] solved = [.. _columns.Select(c => factor.Solve(c))];
            int unknown = steps - 1;
            var corner = new double[unknown, unknown];
            var rest = new double[unknown];
            for (int i = 0; i < unknown; i++)
            {
                rest[i] = _right[i + 1] - Dot(_columns[i + 1], free);
                for (int j = 0; j < unknown; j++)
                {
                    corner[i, j] = _corner[i + 1, j + 1] - Dot(_columns[i + 1], solved[j + 1]) + (i == j ? 1 / (spread * spread) : 0);
                }
            }

            (_solved, _information) = (solved, corner);
            double[] errors = [0, .. SmallSymmetric.Solve(corner, rest)];
            Subtract(errors, free);
            return (free, errors);
        }

        /// <summary>Adds the step errors' uncertainty to a draw of the path for known step errors.</summary>
        public (double[] Path, double[] StepErrors) Draw(double[] path, SeededRandom random)
        {
            double[] white = [.. Enumerable.Range(1, steps - 1).Select(_ => random.NextNormal())];
            double[] errors = [0, .. SmallSymmetric.Colour(_information, white)];
            Subtract(errors, path);
            return (path, errors);
        }

        private void Subtract(double[] errors, double[] path)
        {
            for (int s = 1; s < steps; s++)
            {
                for (int i = 0; i < path.Length; i++)
                {
                    path[i] -= errors[s] * _solved[s][i];
                }
            }
        }

        private static double Dot(double[] a, double[] b)
        {
            double sum = 0;
            for (int i = 0; i < a.Length; i++)
            {
                sum += a[i] * b[i];
            }

            return sum;
        }
    }
}
