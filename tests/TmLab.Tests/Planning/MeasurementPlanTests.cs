using CsCheck;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Planning;
using TmLab.Quantities;
using Xunit;

namespace TmLab.Tests.Planning;

public sealed class MeasurementPlanTests
{
    private const int Plans = 40;

    private static readonly Gen<PlanSettings> s_settings =
        Gen.Select(Gen.Int[0, 6], Gen.Int[3, 7], Gen.Double[0, 2], Gen.Bool, Gen.Int[0, 3]).Select((bits, steps, drift, isHadamard, other) =>
        {
            var grid = new GridShape(1 << (bits / 2), 1 << (bits - (bits / 2)));
            return new PlanSettings
            {
                Modes = new ModeDescription(isHadamard ? BasisKind.Hadamard : BasisKind.Fourier, HadamardOrdering.Natural, grid.Count, grid, null, null),
                Steps = steps,
                DriftRadPerSqrtSecond = drift,
                TrackerPattern = grid.Count - 1,
                DarkFrames = other,
                ReferenceFrames = 3 - other,
                BlankFrames = other,
                DecorrelationTimeS = other == 0 ? double.PositiveInfinity : 10 * other,
            };
        });

    [Fact]
    public void Every_plan_shows_every_pattern_between_trackers_and_passes_the_checks_of_schedules() => s_settings.Sample(settings =>
    {
        var plan = MeasurementPlan.Make(settings);
        FrameRole[] stepped = [.. plan.Schedule.Frames.Where(f => f.IsStepped).Select(f => f.Role)];
        return plan.Schedule.Modes.Select(g => g.Mode).Order().SequenceEqual(Enumerable.Range(0, settings.Modes.PatternCount))
            && stepped[0] == FrameRole.Tracker
            && stepped[^1] == FrameRole.Tracker
            && ScheduleChecks.Check(plan.Schedule.Frames, plan.Manifest.Modes, "plan").IsEmpty
            && plan.FrameBytes == (long)plan.Schedule.Frames.Length * 64 * 64 * 2;
    }, iter: Plans);

    [Fact]
    public void Predicted_fidelities_lie_between_nought_and_one_and_the_parts_multiply() => s_settings.Sample(settings =>
    {
        PlannedBudget budget = MeasurementPlan.Make(settings).Budget;
        double product = budget.NoiseFidelity * budget.DriftFidelity * budget.DecorrelationFidelity * budget.PanelEfficiency;
        return budget.Fidelity is > 0 and <= 1 && Math.Abs(product - budget.Fidelity) < 1e-12 && budget.SaturatedShare is >= 0 and <= 1;
    }, iter: Plans);

    [Fact]
    public void The_chosen_spacing_keeps_the_phase_between_trackers_below_a_quarter_turn_or_warns() => s_settings.Sample(settings =>
    {
        var plan = MeasurementPlan.Make(settings);
        return plan.Spacing.IsAmbiguous
            ? plan.Spacing.EveryModes == 1 && plan.Warnings.Any(w => w.Contains("unwrapped wrongly", StringComparison.Ordinal))
            : plan.Budget.TrackerGapRad <= (Math.PI / 2) + 1e-9;
    }, iter: Plans);

    /// <summary>Shot-limited interferometry: SNR = S · I_s for a reference much brighter than the signal (derived in Yilmaz, Vos and Mosk, Biomed. Opt. Express 4, 1759 (2013): the number of detected photoelectrons decides).</summary>
    [Fact]
    public void A_bright_reference_leaves_as_signal_to_noise_the_signal_s_photoelectrons_of_all_steps()
    {
        var settings = new PlanSettings
        {
            SignalElectrons = 20,
            ReferenceElectrons = 2e6,
            Camera = new PlannedCamera(new ImageSize(8, 8), 16, 1e3, 1.6, 1e9, 0),
            TrackerEveryModes = 0,
        };
        PlannedBudget budget = MeasurementPlan.Make(settings).Budget;
        Assert.Equal(1 / (4 * 20.0), budget.ShotNoise, 1e-4 / 80);
    }

    /// <summary>EMVA standard 1288, linear model: σ² = σ_d² + σ_q²/K² + μ_e, here for S frames of one pattern.</summary>
    [Fact]
    public void Read_noise_and_rounding_enter_as_the_camera_standard_says()
    {
        var settings = new PlanSettings { TrackerEveryModes = 0, SignalElectrons = 100, ReferenceElectrons = 400 };
        PlannedBudget budget = MeasurementPlan.Make(settings).Budget;
        Assert.Equal(1.6 * 1.6 / (4 * 400.0 * 100), budget.ReadNoise, 1e-12);
        Assert.Equal(7.5 * 7.5 / 12 / (4 * 400.0 * 100), budget.CountRounding, 1e-12);
        Assert.Equal(500.0 / (4 * 400 * 100), budget.ShotNoise, 1e-12);
    }

    /// <summary>L even levels of phase: sinc²(1/L), as for blazed gratings (values from memory; sinc x = sin πx / πx).</summary>
    [Theory]
    [InlineData(4, 0.810569)]
    [InlineData(8, 0.949641)]
    [InlineData(16, 0.987215)]
    public void Few_levels_of_the_panel_cost_what_they_cost_gratings(int levels, double expected)
    {
        var settings = new PlanSettings
        {
            Modes = new ModeDescription(BasisKind.Fourier, HadamardOrdering.Natural, 64, new GridShape(8, 8), null, null),
            PhaseLut = new GrayPhaseTable([.. Enumerable.Range(0, levels)], [.. Enumerable.Range(0, levels).Select(g => 2 * Math.PI * g / levels)]),
        };

        // A table's grey levels are all that the panel shows; 512 phases sample the mean to some parts in 10⁴.
        Assert.Equal(expected, MeasurementPlan.Make(settings).Budget.PanelEfficiency, 2e-3);
    }

    [Fact]
    public void Saturation_without_reference_follows_the_exponential_law_of_speckle()
    {
        // P(I > 3⟨I⟩) = e^{−3}; Goodman, J. Opt. Soc. Am. 66, 1145 (1976).
        Assert.Equal(Math.Exp(-3), SaturationModel.Share(1e-9, 1000, 3000), 1e-5);
        Assert.Equal(1, SaturationModel.Share(5000, 1e-3, 3000), 1e-9);
        Assert.Equal(0, SaturationModel.Share(1000, 1e-3, 3000), 1e-9);
    }

    [Fact]
    public void A_bridge_between_trackers_has_the_mean_variance_of_its_formula()
    {
        // m modes on a bridge of n = m + 1 gaps of variance c: Σ_j c j (n − j)/n / m, summed here by hand for m = 4, and c from the walk alone.
        var settings = new PlanSettings
        {
            SignalElectrons = 1e8, ReferenceElectrons = 1e8, TrackerEveryModes = 4, DriftRadPerSqrtSecond = 0.5, FrameRateHz = 50,
            Camera = new PlannedCamera(new ImageSize(64, 64), 16, 1e6, 0, 1e12, 0),
        };
        double c = 0.25 / 50;
        double mean = c * Enumerable.Range(1, 4).Sum(j => j * (5.0 - j) / 5) / 4;
        double found = MeasurementPlan.Make(settings).Budget.DriftVarianceRad2;
        Assert.InRange(found, mean, mean * 1.02);
    }

    [Fact]
    public void What_improves_in_theory_improves_in_the_table_of_changes()
    {
        var plan = MeasurementPlan.Make(new PlanSettings { SignalElectrons = 50, ReferenceElectrons = 200 });
        PlanVariation Of(string change) => Assert.Single(plan.Variations, v => v.Change == change);
        Assert.True(Of("trackers twice as often").FidelityChange > 0);
        Assert.True(Of("trackers half as often").FidelityChange < 0);
        Assert.True(Of("one step more").FidelityChange > 0);
        Assert.True(Of("twice the light").FidelityChange > 0);
        Assert.True(Of("half the drift").FidelityChange > 0);
        Assert.Equal(2 * plan.DurationS, Of("exposure twice as long").DurationS, 1e-9);
    }

    [Theory]
    [InlineData(BasisKind.Hadamard)]
    [InlineData(BasisKind.HadamardBinary)]
    [InlineData(BasisKind.Fourier)]
    [InlineData(BasisKind.Pixel)]
    public void The_light_of_a_pattern_is_the_sum_over_its_elements(BasisKind kind)
    {
        var modes = new ModeDescription(kind, HadamardOrdering.Sequency, 16, new GridShape(4, 4), null, null);
        IPatternBasis basis = PatternBases.Create(modes, []);
        double[] summed = PatternPower.Of(basis, BasisKind.Custom);
        Assert.All(PatternPower.Of(basis, kind).Zip(summed), p => Assert.Equal(p.Second, p.First, 1e-9));
    }

    [Fact]
    public void A_repair_shows_the_lost_patterns_and_no_others()
    {
        var plan = MeasurementPlan.Make(new PlanSettings { RepairPatterns = [7, 200], TrackerPattern = 3 });
        Assert.Equal([7, 200], plan.Schedule.Modes.Select(g => g.Mode));
        Assert.All(plan.Schedule.Trackers, t => Assert.Equal(3, t.Mode));
        Assert.Equal(FrameRole.Tracker, plan.Schedule.Groups[0].Role);
        Assert.Equal(FrameRole.Tracker, plan.Schedule.Groups[^1].Role);
    }

    [Theory]
    [InlineData(BasisKind.Hadamard, ModulatorKind.Amplitude)]
    [InlineData(BasisKind.Fourier, ModulatorKind.Amplitude)]
    [InlineData(BasisKind.Pixel, ModulatorKind.Phase)]
    [InlineData(BasisKind.HadamardBinary, ModulatorKind.Phase)]
    public void Patterns_that_the_panel_cannot_show_are_refused(BasisKind basis, ModulatorKind panel)
    {
        var standard = new PlanSettings();
        PlanSettings settings = standard with
        {
            Modes = standard.Modes with { Basis = basis },
            Modulator = standard.Modulator with { Kind = panel },
            StepDevice = StepDevice.ReferenceArm,
        };
        Assert.Equal("modes.basis", Assert.Single(Assert.Throws<BadInputException>(() => MeasurementPlan.Make(settings)).Problems).Place);
    }
}
