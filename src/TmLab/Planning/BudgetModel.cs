using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Shaping;

namespace TmLab.Planning;

/// <summary>
/// Computes the error budget of a plan. An even reference R and a signal of mean E (photoelectrons) interfere as
/// I = R + |E_k|² + 2 Re(D_k e^{iδ}); S equal steps give D_k with the variance σ²/S of a count's variance σ² (in photoelectrons²), and
/// the basis carries it to the matrix. Independent of the schedule's times but for drift and decorrelation.
/// </summary>
internal sealed class BudgetModel
{
    // As many pixels as the reconstruction follows the phases with.
    private const int DriftPixels = 1024;
    private const int PanelPhases = 512;

    private readonly PlanSettings _settings;
    private readonly IPatternBasis _basis;
    private readonly double[] _power;
    private readonly double _panelEfficiency;

    /// <summary>Takes settings that passed their checks; the basis is looked at once for all budgets of the same patterns.</summary>
    public BudgetModel(PlanSettings settings)
    {
        _settings = settings;
        _basis = PatternBases.Create(settings.Modes, settings.CustomPatterns);
        _power = PatternPower.Of(_basis, settings.Modes.Basis);
        _panelEfficiency = PanelEfficiency(settings);
    }

    private BudgetModel(PlanSettings settings, BudgetModel samePatterns)
    {
        _settings = settings;
        _basis = samePatterns._basis;
        _power = samePatterns._power;
        _panelEfficiency = settings.Steps == samePatterns._settings.Steps ? samePatterns._panelEfficiency : PanelEfficiency(settings);
    }

    /// <summary>The model for other settings of the same patterns on the same panel.</summary>
    public BudgetModel With(PlanSettings settings) => new(settings, this);

    /// <summary>The budget of a schedule of these settings.</summary>
    public PlannedBudget Of(Schedule schedule)
    {
        int[] showings = Showings(schedule);
        return new PlannedBudget(
            Noise(showings, k => _settings.ReferenceElectrons + Signal(k)),
            Noise(showings, _ => Squared(_settings.Camera.ReadNoiseElectrons)),
            Noise(showings, _ => Squared(_settings.Camera.ElectronsPerCount) / 12),
            DriftVariance(schedule),
            PhaseErrorGain(showings),
            FieldCorrelation(schedule),
            _panelEfficiency,
            SaturationModel.Share(_settings.ReferenceElectrons, _settings.SignalElectrons, _settings.Camera.SaturationElectrons),
            4 * Math.Sqrt(WalkRate * LongestGapS(schedule)),
            _basis.ModeCount);
    }

    private double WalkRate => Squared(_settings.DriftRadPerSqrtSecond);

    private double FrameIntervalS => 1 / _settings.FrameRateHz;

    private static double Squared(double x) => x * x;

    /// <summary>|E_k|², photoelectrons.</summary>
    private double Signal(int pattern) => _settings.SignalElectrons * _power[pattern] / _basis.ModeCount;

    /// <summary>How often each pattern is shown, as mode or tracker; patterns that a repair leaves out were shown once before.</summary>
    private int[] Showings(Schedule schedule)
    {
        int[] showings = new int[_basis.PatternCount];
        foreach (StepGroup group in schedule.Groups)
        {
            showings[group.Mode]++;
        }

        return [.. showings.Select(s => Math.Max(s, 1))];
    }

    /// <summary>Noise energy of a row over its signal energy R E, for a variance of a frame's photoelectrons a pattern.</summary>
    private double Noise(int[] showings, Func<int, double> frameVariance)
    {
        double[] column = [.. showings.Select((s, k) => frameVariance(k) / (_settings.Steps * (double)s))];
        return PatternPower.TotalVariance(_basis, column) / (_settings.ReferenceElectrons * _settings.SignalElectrons);
    }

    private double PhaseErrorGain(int[] showings)
    {
        double[] column = [.. showings.Select((s, k) => _power[k] / s)];
        return PatternPower.TotalVariance(_basis, column) / _basis.ModeCount;
    }

    /// <summary>
    /// Inside a mode every frame's phase is measured, the jump from one mode to the next is not. Between two trackers m modes lie
    /// on a bridge of m + 1 gaps whose increments have the variance c each: mean variance c (m + 2)/6. Without trackers the mean phase
    /// of the whole is free, and the mean variance about it is the same.
    /// </summary>
    private double DriftVariance(Schedule schedule)
    {
        double increment = WalkRate * FrameIntervalS;
        double measured = MeasuredVariance(Typical(schedule));
        double within = Combine(measured, increment * (_settings.Steps - 1));
        double bridge = RunsOfModes(schedule).Sum(m => m * (m + 2.0) / 6) / Math.Max(1, schedule.Modes.Count());
        // Between the steps of one mode the fringes' conjugate term is left: 2g/S² for increments g (derived for S equal steps).
        double conjugate = 2 * Combine(measured, increment) / Squared(_settings.Steps);
        double pin = 2 * FrameVariance(_settings.TrackerPattern) / _settings.Steps;
        return ((increment + within) * bridge) + conjugate + pin;
    }

    private static int Typical(Schedule schedule) => schedule.Modes.ElementAt(schedule.Modes.Count() / 2).Mode;

    /// <summary>Variance of one frame's phase if the fields were known: σ²/(2 P |D|²) over P pixels.</summary>
    private double FrameVariance(int pattern)
    {
        double frame = _settings.ReferenceElectrons + Signal(pattern) + Squared(_settings.Camera.ReadNoiseElectrons)
            + (Squared(_settings.Camera.ElectronsPerCount) / 12);
        int pixels = Math.Min(DriftPixels, _settings.Camera.Size.PixelCount);
        return frame / (2 * pixels * _settings.ReferenceElectrons * Signal(pattern));
    }

    /// <summary>
    /// Variance of the change of phase from the first to the last frame of a mode: of S counts a pixel two go into the pixel's field;
    /// the background is bound to it by the coherence of the light, which the reconstruction makes use of.
    /// </summary>
    private double MeasuredVariance(int pattern) => 2 * FrameVariance(pattern) * _settings.Steps / (_settings.Steps - 2);

    /// <summary>Variance where a measurement and an expectation are both at hand.</summary>
    private static double Combine(double measured, double expected) =>
        expected == 0 ? 0 : measured * expected / (measured + expected);

    /// <summary>Lengths of the runs of modes between trackers.</summary>
    private static IEnumerable<int> RunsOfModes(Schedule schedule)
    {
        int run = 0;
        foreach (StepGroup group in schedule.Groups)
        {
            if (group.Role == FrameRole.Mode)
            {
                run++;
            }
            else if (run > 0)
            {
                yield return run;
                run = 0;
            }
        }

        if (run > 0)
        {
            yield return run;
        }
    }

    private static double LongestGapS(Schedule schedule)
    {
        double[] trackers = [.. schedule.Trackers.Select(g => schedule.Frames[g.Frames[0]].TimeS)];
        return trackers.Length < 2
            ? schedule.Frames[^1].TimeS - schedule.Frames[0].TimeS
            : trackers.Zip(trackers.Skip(1), (a, b) => b - a).Max();
    }

    private double FieldCorrelation(Schedule schedule)
    {
        double start = schedule.Frames[0].TimeS;
        return double.IsInfinity(_settings.DecorrelationTimeS)
            ? 1
            : schedule.Modes.Average(g => g.Frames.Average(f => Math.Exp(-(schedule.Frames[f].TimeS - start) / _settings.DecorrelationTimeS)));
    }

    /// <summary>sinc²(1/L) for L even levels and patterns of all phases; exact for the phases that Hadamard patterns need.</summary>
    private static double PanelEfficiency(PlanSettings settings)
    {
        if (settings.Modulator.Kind == ModulatorKind.Amplitude)
        {
            return 1;
        }

        var scale = new GrayScale(settings.PhaseLut);
        double[] errors = [.. NeededPhases(settings).Select(p => scale.Nearest(p).PhaseRad - p)];
        return Squared(errors.Average(Math.Cos)) + Squared(errors.Average(Math.Sin));
    }

    private static IEnumerable<double> NeededPhases(PlanSettings settings)
    {
        if (settings.Modes.Basis != BasisKind.Hadamard)
        {
            return Enumerable.Range(0, PanelPhases).Select(i => 2 * Math.PI * (i + 0.5) / PanelPhases);
        }

        int steps = settings.StepDevice == StepDevice.Panel ? settings.Steps : 1;
        return Enumerable.Range(0, steps).SelectMany(s => new[] { 0, Math.PI }.Select(p => (2 * Math.PI * s / steps) + p));
    }
}
