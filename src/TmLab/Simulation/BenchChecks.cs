using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>Refuses benches that cannot be: every number in range, and settings, manifest and schedule of one mind.</summary>
internal static class BenchChecks
{
    /// <summary>Checks all, and gives the frame size.</summary>
    public static ImageSize Check(
        BenchSettings settings, MeasurementManifest manifest, Schedule schedule, ImmutableArray<Complex> customPatterns)
    {
        Preconditions.Require(manifest.Camera.Size is not null, "A simulated measurement needs the frame size in its manifest.");
        ImageSize size = manifest.Camera.Size.Value;
        Preconditions.InRange(size.Width, 1, 1 << 15);
        Preconditions.InRange(size.Height, 1, 1 << 15);
        Preconditions.InRange(manifest.Camera.BitDepth, 1, 16);
        CheckLight(settings);
        CheckCamera(settings.Camera, size);
        CheckPatterns(manifest.Modes, customPatterns);
        CheckSchedule(settings, manifest.Modes, schedule);
        Preconditions.Require(settings.Stray?.Region.FitsIn(size) ?? true, "The stray light's region leaves the camera.");
        return size;
    }

    private static void CheckLight(BenchSettings settings)
    {
        Preconditions.InRange(settings.MeanSignalElectrons, 1e-6, 1e9);
        Preconditions.InRange(settings.BallisticFraction, 0, 1);
        Preconditions.InRange(settings.Reference.IntensityRatio, 1e-6, 1e9);
        Preconditions.Require(settings.DecorrelationTimeS > 0, "The decorrelation time must be positive.");
    }

    private static void CheckCamera(SimulatedCamera camera, ImageSize size)
    {
        Preconditions.InRange(camera.ElectronsPerCount, 1e-6, 1e9);
        Preconditions.InRange(camera.OffsetCounts, 0, ushort.MaxValue);
        Preconditions.InRange(camera.ReadNoiseElectrons, 0, 1e6);
        Preconditions.InRange(camera.FullWellElectrons, 1, 1e12);
        Preconditions.InRange(camera.PrnuRelative, 0, 1);
        Preconditions.InRange(camera.DsnuElectrons, 0, 1e6);
        Preconditions.InRange(camera.DeadPixelCount, 0, size.PixelCount);
        Preconditions.InRange(camera.HotPixelCount, 0, size.PixelCount - camera.DeadPixelCount);
    }

    private static void CheckPatterns(ModeDescription modes, ImmutableArray<Complex> customPatterns)
    {
        Preconditions.InRange(modes.ModeCount, 1, 1 << 24);
        if (modes.Basis == BasisKind.Custom)
        {
            Preconditions.Require(!customPatterns.IsDefault, "Custom patterns must be given.");
            Preconditions.SameLength(customPatterns.Length, (long)modes.PatternCount * modes.ModeCount);
        }
        else
        {
            Preconditions.SameLength(modes.PatternCount, modes.ModeCount);
        }
    }

    private static void CheckSchedule(BenchSettings settings, ModeDescription modes, Schedule schedule)
    {
        int steps = settings.Steps.OffsetRad.IsDefaultOrEmpty ? int.MaxValue : settings.Steps.OffsetRad.Length;
        double time = double.NegativeInfinity;
        foreach (ScheduledFrame frame in schedule.Frames)
        {
            Preconditions.InRange(frame.Mode, frame.IsStepped ? 0 : -1, modes.PatternCount - 1);
            Preconditions.InRange(frame.Step, frame.IsStepped ? 0 : -1, frame.IsStepped ? steps - 1 : int.MaxValue);
            Preconditions.Require(frame.TimeS >= time, "The schedule's times must not fall.");
            time = frame.TimeS;
        }

        foreach (FrameFault fault in settings.Faults)
        {
            Preconditions.InRange(fault.Frame, 0, schedule.Frames.Length - 1);
        }
    }
}
