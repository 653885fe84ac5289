using TmLab.Measurement;
using TmLab.Numerics;

namespace TmLab.Planning;

/// <summary>Refuses plans that cannot be carried out.</summary>
internal static class PlanChecks
{
    private const string Plan = "plan";

    public static void Check(PlanSettings settings)
    {
        CheckNumbers(settings);
        CheckCamera(settings.Camera);
        var problems = new ProblemList(Plan);
        problems.Add(ModeChecks.Check(settings.Modes, Plan));
        CheckPanel(settings, problems);
        problems.ThrowIfAny();
        CheckCustom(settings);
        PanelPatterns.CheckShowable(settings, Plan);
    }

    private static void CheckNumbers(PlanSettings settings)
    {
        Preconditions.InRange(settings.Steps, StepChecks.FewestSteps, 1000);
        Preconditions.InRange(settings.SignalElectrons, 1e-6, 1e9);
        Preconditions.InRange(settings.ReferenceElectrons, 1e-6, 1e9);
        Preconditions.InRange(settings.FrameRateHz, 1e-6, 1e9);
        Preconditions.InRange(settings.DriftRadPerSqrtSecond, 0, 1e6);
        Preconditions.Require(settings.DecorrelationTimeS > 0, "The decorrelation time must be positive.");
    }

    private static void CheckCamera(PlannedCamera camera)
    {
        Preconditions.InRange(camera.Size.Width, 1, 1 << 15);
        Preconditions.InRange(camera.Size.Height, 1, 1 << 15);
        Preconditions.InRange(camera.BitDepth, 1, 16);
        Preconditions.InRange(camera.ElectronsPerCount, 1e-6, 1e9);
        Preconditions.InRange(camera.ReadNoiseElectrons, 0, 1e6);
        Preconditions.InRange(camera.FullWellElectrons, 1, 1e12);
        Preconditions.InRange(camera.OffsetCounts, 0, (1 << camera.BitDepth) - 2);
    }

    private static void CheckPanel(PlanSettings settings, ProblemList problems)
    {
        ModulatorDescription panel = settings.Modulator;
        if (!panel.Region.FitsIn(panel.Size))
        {
            problems.Add("modulator.region", $"the region leaves the panel of {panel.Size} pixels", "make it smaller or move it");
        }
        else if (panel.Region.Width < settings.Modes.Grid.Columns || panel.Region.Height < settings.Modes.Grid.Rows)
        {
            problems.Add(
                "modulator.region", $"{panel.Region.Width} × {panel.Region.Height} panel pixels hold no {settings.Modes.Grid} macro-pixels (rows × columns)",
                "use a larger region or a coarser grid");
        }

        if (panel.Kind == ModulatorKind.Amplitude && settings.StepDevice == StepDevice.Panel)
        {
            problems.Add("modulator.kind", "an amplitude panel cannot carry phase steps", "step the reference or another device in the signal arm");
        }

        if (settings.TrackerPattern < 0 || settings.TrackerPattern >= settings.Modes.PatternCount)
        {
            problems.Add("tracker", $"pattern {settings.TrackerPattern} lies outside 0 … {settings.Modes.PatternCount - 1}", "track one of the patterns");
        }
    }

    private static void CheckCustom(PlanSettings settings)
    {
        if (settings.Modes.Basis == BasisKind.Custom)
        {
            Preconditions.SameLength(settings.CustomPatterns.Length, (long)settings.Modes.PatternCount * settings.Modes.ModeCount);
        }
    }
}
