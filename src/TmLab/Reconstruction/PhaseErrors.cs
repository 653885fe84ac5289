using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction;

/// <summary>
/// What errors of the frames' phases do to the columns: D̂_k = u_k D_k + v_k D_k*, with u = Σ w_s e^{iθ_s} and v = Σ w_s e^{−iθ_s},
/// w the weights for the phases as believed and θ the phases as they may be, over draws from the posterior of the drift path.
/// </summary>
internal sealed class PhaseErrors
{
    private const int Draws = 16;

    private readonly StepGroup[] _groups;
    private readonly StepFit[] _fits;
    private readonly double[] _theta;
    private readonly int _patterns;
    private readonly Schedule _schedule;

    private PhaseErrors(Schedule schedule, ImmutableArray<double> totalPhaseRad, int patterns)
    {
        _groups = [.. schedule.Groups];
        _fits = [.. _groups.Select(g => FramePhases.Fit(g, totalPhaseRad))];
        _theta = [.. totalPhaseRad];
        _patterns = patterns;
        _schedule = schedule;
    }

    /// <summary>Losses of fidelity by the drift that is left and by the steps' errors that are left; and what the columns are made of.</summary>
    /// <param name="Drift">1 − fidelity with the phases' errors of the path alone.</param>
    /// <param name="Steps">1 − fidelity with the common errors of the steps alone.</param>
    /// <param name="Columns">One set of coefficients a draw.</param>
    public sealed record Outcome(double Drift, double Steps, ImmutableArray<ColumnErrors> Columns);

    /// <summary>Draws; without a smoothed path nothing is known of the drift that is left.</summary>
    public static Outcome Draw(Schedule schedule, ImmutableArray<double> totalPhaseRad, DriftEstimate drift, IPatternBasis basis, ColumnMixture mixture)
    {
        int patterns = basis.PatternCount;
        if (drift.Solver is null)
        {
            return new Outcome(double.NaN, double.NaN, [ColumnErrors.None(patterns)]);
        }

        var errors = new PhaseErrors(schedule, totalPhaseRad, patterns);
        var all = new List<ColumnErrors>();
        var driftOnly = new List<ColumnErrors>();
        var stepsOnly = new List<ColumnErrors>();
        foreach ((double[] frames, double[] _) in drift.Solver.DrawErrors(Draws))
        {
            double[] common = errors.CommonBySteps(frames);
            all.Add(errors.Columns(f => frames[f]));
            driftOnly.Add(errors.Columns(f => frames[f] - common[errors.Step(f)]));
            stepsOnly.Add(errors.Columns(f => common[errors.Step(f)]));
        }

        return new Outcome(1 - mixture.Fidelity(driftOnly), 1 - mixture.Fidelity(stepsOnly), [.. all]);
    }

    private int Step(int frame) => _schedule.Frames[frame].Step;

    private double[] CommonBySteps(double[] frames)
    {
        int steps = _groups.Max(g => g.Frames.Max(Step)) + 1;
        var sum = new double[steps];
        var count = new int[steps];
        foreach (int f in _groups.SelectMany(g => g.Frames))
        {
            sum[Step(f)] += frames[f];
            count[Step(f)]++;
        }

        return [.. sum.Select((s, i) => s / Math.Max(1, count[i]))];
    }

    private ColumnErrors Columns(Func<int, double> error)
    {
        var direct = new Complex[_patterns];
        var conjugate = new Complex[_patterns];
        var showings = new int[_patterns];
        for (int g = 0; g < _groups.Length; g++)
        {
            StepGroup group = _groups[g];
            showings[group.Mode]++;
            for (int s = 0; s < group.Frames.Length; s++)
            {
                double theta = _theta[group.Frames[s]] + error(group.Frames[s]);
                direct[group.Mode] += _fits[g].Field[s] * Complex.FromPolarCoordinates(1, theta);
                conjugate[group.Mode] += _fits[g].Field[s] * Complex.FromPolarCoordinates(1, -theta);
            }
        }

        return new ColumnErrors(
            [.. direct.Select((u, k) => u / Math.Max(1, showings[k]))], [.. conjugate.Select((v, k) => v / Math.Max(1, showings[k]))]);
    }
}

/// <summary>D̂_k = u_k D_k + v_k D_k*.</summary>
/// <param name="Direct">u, one a pattern.</param>
/// <param name="Conjugate">v, one a pattern.</param>
internal sealed record ColumnErrors(ImmutableArray<Complex> Direct, ImmutableArray<Complex> Conjugate)
{
    /// <summary>Columns as they should be.</summary>
    public static ColumnErrors None(int patterns) => new([.. Enumerable.Repeat(Complex.One, patterns)], [.. new Complex[patterns]]);
}
