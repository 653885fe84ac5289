using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>
/// The measurement that ships with the program. Bench, place and object are invented: a frosted pane of the storm lantern of the
/// Quillhaven light, which does not exist. The numbers are those of an ordinary bench: 256 macro-pixels,
/// four steps, a drift of several radians, shot noise, a few dead pixels.
/// </summary>
public static class DemoMeasurement
{
    /// <summary>The frames' file name in the measurement folder.</summary>
    public const string FramesFile = "frames.raw";

    /// <summary>The schedule's file name in the measurement folder.</summary>
    public const string ScheduleFile = "schedule.csv";

    /// <summary>What the bench says.</summary>
    public static MeasurementManifest Manifest { get; } = new(
        "storm-lantern pane of the Quillhaven light (invented), 256 modes",
        632.8,
        new CameraDescription(new ImageSize(36, 36), 12, 6.5, 7.5, 1.6),
        new FrameLocation(FrameStorageKind.Raw, [FramesFile], null, RawPixelFormat.UInt16LittleEndian, 0),
        new ScheduleLocation(ScheduleFile, null, 0),
        new ModeDescription(BasisKind.Hadamard, HadamardOrdering.Natural, 256, new GridShape(16, 16), null, null),
        new ModulatorDescription(
            ModulatorKind.Phase, new ImageSize(512, 512), new PixelRectangle(0, 0, 512, 512), 15, null, null),
        SteppedArm.Signal,
        null,
        "Invented data, made by a seeded simulation; see README.md beside this file.");

    /// <summary>1,104 frames at 100 a second: dark and reference frames, then 256 modes of four steps with 17 trackers between.</summary>
    public static Schedule Schedule { get; } = ScheduleBuilder.Build(new ScheduleSettings
    {
        PatternCount = 256,
        Steps = 4,
        TrackerEveryModes = 16,
        DarkFrames = 6,
        ReferenceFrames = 6,
        FrameRateHz = 100,
    });

    /// <summary>The simulated bench.</summary>
    public static BenchSettings Settings { get; } = new()
    {
        Seed = 1887,
        Medium = new IndependentGaussian(),
        Grain = new SpeckleGrain(1.8),
        MeanSignalElectrons = 1000,
        Reference = new ReferenceBeam(ReferenceShape.Plane, 4, 0.05, -0.03),
        Camera = new SimulatedCamera { DeadPixelCount = 3 },
        PhaseDrift = [new RandomWalkDrift(0.45), new LinearDrift(0.35), new SinusoidalDrift(0.25, 0.21, 0.4)],
        Power = new PowerDrift(LinearPerSecond: -0.001, WalkPerSqrtSecond: 0.003, FrameNoise: 0.001),
        Steps = new StepError(LinearScale: 0.01),
    };

    /// <summary>Sets up the bench; its frames are the shipped ones, byte for byte.</summary>
    /// <param name="threads">Largest number of threads; 0 for one a processor.</param>
    public static VirtualBench CreateBench(int threads = 0) => VirtualBench.Create(Settings, Manifest, Schedule, threads: threads);
}
