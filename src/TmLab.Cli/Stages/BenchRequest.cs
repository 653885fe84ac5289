using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Simulation;

namespace TmLab.Cli.Stages;

/// <summary>The kinds of sample on the virtual bench.</summary>
internal enum MediumKind
{
    /// <summary>Independent Gaussian elements.</summary>
    Gaussian,

    /// <summary>A diffusive slab with the bimodal law of transmission eigenvalues.</summary>
    Slab,

    /// <summary>A thin diffuser with the angular memory effect.</summary>
    Diffuser,
}

/// <summary>A virtual bench as it was asked for; what is null is taken from the measurement, its plan, or the defaults.</summary>
internal sealed record BenchRequest
{
    public ulong Seed { get; init; } = 1;

    public MediumKind Medium { get; init; }

    public double MeanTransmittance { get; init; } = 0.1;

    public int? Channels { get; init; }

    public double ThicknessMacroPixels { get; init; } = 2;

    public double BallisticFraction { get; init; }

    public double GrainPixels { get; init; } = 2;

    public double? SignalElectrons { get; init; }

    public double? ReferenceRatio { get; init; }

    public ReferenceShape ReferenceShape { get; init; }

    public double? ElectronsPerCount { get; init; }

    public double? ReadNoiseElectrons { get; init; }

    public double? FullWellElectrons { get; init; }

    public double? OffsetCounts { get; init; }

    public double PrnuRelative { get; init; } = 0.004;

    public double DsnuElectrons { get; init; } = 0.5;

    public int DeadPixels { get; init; }

    public int HotPixels { get; init; }

    public double? WalkRadPerSqrtSecond { get; init; }

    public ImmutableArray<PhaseDrift> OtherDrift { get; init; } = [];

    public PowerDrift Power { get; init; } = new();

    public double? DecorrelationTimeS { get; init; }

    public StepError Steps { get; init; } = new();

    public ImmutableArray<FrameFault> Faults { get; init; } = [];

    public StrayLight? Stray { get; init; }

    /// <summary>The medium, for people.</summary>
    public string MediumInWords => Medium switch
    {
        MediumKind.Slab => FormattableString.Invariant($"diffusive slab, mean transmittance {MeanTransmittance}"),
        MediumKind.Diffuser => FormattableString.Invariant($"thin diffuser, {ThicknessMacroPixels} macro-pixels thick"),
        _ => "independent Gaussian elements",
    };

    /// <summary>The bench for a measurement.</summary>
    /// <param name="manifest">The measurement's manifest, with the frame size.</param>
    /// <param name="plan">What its plan expects; null where it was not planned.</param>
    public BenchSettings For(MeasurementManifest manifest, PlanExpectations? plan)
    {
        PlanExpectations expected = plan ?? PlanExpectations.Of(new PlanSettings());
        double signal = SignalElectrons ?? expected.SignalElectrons;
        double walk = WalkRadPerSqrtSecond ?? expected.DriftRadPerSqrtSecond;
        return new BenchSettings
        {
            Seed = Seed,
            Medium = MediumFor(manifest),
            BallisticFraction = BallisticFraction,
            Grain = new SpeckleGrain(GrainPixels),
            MeanSignalElectrons = signal,
            Reference = new ReferenceBeam(ReferenceShape, ReferenceRatio ?? expected.ReferenceElectrons / expected.SignalElectrons),
            Camera = CameraFor(manifest.Camera, expected),
            PhaseDrift = walk > 0 ? [new RandomWalkDrift(walk), .. OtherDrift] : OtherDrift,
            Power = Power,
            DecorrelationTimeS = DecorrelationTimeS ?? expected.DecorrelationTimeS,
            Steps = Steps,
            Faults = Faults,
            Stray = Stray,
        };
    }

    private Medium MediumFor(MeasurementManifest manifest)
    {
        ImageSize size = manifest.Camera.Size!.Value;
        int most = Math.Max(2 * manifest.Modes.ModeCount, size.PixelCount);
        return Medium switch
        {
            MediumKind.Slab => new DiffusiveSlab(MeanTransmittance, Channels ?? most),
            MediumKind.Diffuser => new ThinDiffuser(ThicknessMacroPixels),
            _ => new IndependentGaussian(),
        };
    }

    private SimulatedCamera CameraFor(CameraDescription camera, PlanExpectations expected)
    {
        var standard = new SimulatedCamera();
        return new SimulatedCamera
        {
            ElectronsPerCount = ElectronsPerCount ?? camera.ElectronsPerCount ?? standard.ElectronsPerCount,
            ReadNoiseElectrons = ReadNoiseElectrons ?? camera.ReadNoiseElectrons ?? standard.ReadNoiseElectrons,
            FullWellElectrons = FullWellElectrons ?? expected.FullWellElectrons,
            OffsetCounts = OffsetCounts ?? expected.OffsetCounts,
            PrnuRelative = PrnuRelative,
            DsnuElectrons = DsnuElectrons,
            DeadPixelCount = DeadPixels,
            HotPixelCount = HotPixels,
        };
    }
}
