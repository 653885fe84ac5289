using System.Collections.Immutable;
using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using TmLab.Cli.Options;
using TmLab.Cli.Stages;
using TmLab.Quantities;
using TmLab.Simulation;

namespace TmLab.Cli.Commands;

/// <summary>The options of <c>tmlab simulate</c> that describe the virtual bench.</summary>
internal sealed class BenchOptions
{
    private const double Most = 1e9;

    private static readonly BenchRequest Standard = new();

    private readonly Option<int> _seed = NumberOptions.Whole("--seed", "NUMBER", 0, int.MaxValue, (int)Standard.Seed, "The seed of all random numbers.");

    private readonly Option<MediumKind?> _medium = WordOption.Create(
        "--medium", "The sample (gaussian when not given).",
        ("gaussian", MediumKind.Gaussian), ("slab", MediumKind.Slab), ("diffuser", MediumKind.Diffuser));

    private readonly Option<double> _transmittance = NumberOptions.Number(
        "--transmittance", "SHARE", 0.005, 1, Standard.MeanTransmittance, "The slab's mean transmittance.");

    private readonly Option<int?> _channels = NumberOptions.OptionalWhole(
        "--channels", "COUNT", 1, 1 << 20, "The slab's transverse channels (twice the modes, or the pixels if those are more, when not given).");

    private readonly Option<double> _thickness = NumberOptions.Number(
        "--thickness", "MACROPIXELS", 0.5, 1000, Standard.ThicknessMacroPixels, "The diffuser's thickness in widths of a macro-pixel.");

    private readonly Option<double> _ballistic = NumberOptions.Number("--ballistic", "SHARE", 0, 1, 0, "The share of light that passes unscattered.");

    private readonly Option<double> _grain = NumberOptions.Number(
        "--grain", "PIXELS", 0, 1000, Standard.GrainPixels, "The width of a speckle grain, camera pixels, 0 for independent pixels.");

    private readonly Option<double?> _signal = Planned("--signal", "E", 1e-6, Most, "The mean signal, photoelectrons a pixel a frame");
    private readonly Option<double?> _ratio = Planned("--reference-ratio", "RATIO", 1e-6, Most, "The reference's mean intensity over the signal's");

    private readonly Option<ReferenceShape?> _shape = WordOption.Create(
        "--reference-shape", "The reference's form on the camera (plane when not given).",
        ("plane", ReferenceShape.Plane), ("speckle", ReferenceShape.Speckle));

    private readonly Option<double?> _gain = Planned("--electrons-per-count", "E", 1e-6, Most, "The photoelectrons a count");
    private readonly Option<double?> _readNoise = Planned("--read-noise", "E", 0, 1e6, "The read noise, photoelectrons r.m.s.");
    private readonly Option<double?> _fullWell = Planned("--full-well", "E", 1, 1e12, "The photoelectrons at which a pixel is full");
    private readonly Option<double?> _offset = Planned("--offset", "COUNTS", 0, ushort.MaxValue, "The counts in darkness");

    private readonly Option<double> _prnu = NumberOptions.Number("--prnu", "SHARE", 0, 1, Standard.PrnuRelative, "The relative spread of the pixels' sensitivity.");

    private readonly Option<double> _dsnu = NumberOptions.Number("--dsnu", "E", 0, 1e6, Standard.DsnuElectrons, "The spread of the pixels' dark signal, photoelectrons.");
    private readonly Option<int> _dead = NumberOptions.Whole("--dead-pixels", "COUNT", 0, 1 << 28, 0, "The pixels that see no light.");
    private readonly Option<int> _hot = NumberOptions.Whole("--hot-pixels", "COUNT", 0, 1 << 28, 0, "The pixels that stand at full scale.");
    private readonly Option<double?> _walk = Planned("--drift", "RAD", 0, 1e6, "The phase's random walk, radians r.m.s. in one second");
    private readonly Option<double> _linear = NumberOptions.Number("--drift-linear", "RAD/S", -1e6, 1e6, 0, "A steady drift of the phase, radians a second.");

    private readonly Option<ImmutableArray<PhaseDrift>> _sine = Several<PhaseDrift>(
        "--drift-sine", "RAD,HZ", "A swing of the phase: amplitude and frequency. May be repeated.", 2, n => new SinusoidalDrift(n[0], n[1]));

    private readonly Option<ImmutableArray<PhaseDrift>> _jump = Several<PhaseDrift>(
        "--drift-jump", "S,RAD", "A sudden, lasting change of the phase: when and by how much. May be repeated.", 2, n => new JumpDrift(n[0], n[1]));

    private readonly Option<double> _powerLinear = NumberOptions.Number("--power-linear", "SHARE/S", -1, 1, 0, "A steady change of the laser power a second.");
    private readonly Option<double> _powerWalk = NumberOptions.Number("--power-walk", "SHARE", 0, 1, 0, "The laser power's random walk, r.m.s. in one second.");
    private readonly Option<double> _powerNoise = NumberOptions.Number("--power-noise", "SHARE", 0, 1, 0, "The laser power's noise from frame to frame, r.m.s.");
    private readonly Option<double?> _decorrelation = Planned("--decorrelation-time", "S", 1e-9, 1e12, "The time in which the sample's field correlation falls to 1/e");
    private readonly Option<double> _stepScale = NumberOptions.Number("--step-scale", "SHARE", -1, 1, 0, "By what share all phase steps are too long.");
    private readonly Option<double> _stepJitter = NumberOptions.Number("--step-jitter", "RAD", 0, 10, 0, "The independent error of every phase step, radians r.m.s.");

    private readonly Option<ImmutableArray<FrameFault>> _fault = new("--fault")
    {
        Description = "A fault of a frame, such as dropped@120 (dropped, duplicated, stale, swapped or shaken). May be repeated.",
        HelpName = "KIND@FRAME",
        Arity = ArgumentArity.OneOrMore,
        CustomParser = ParseFaults,
    };

    private readonly Option<ImmutableArray<StrayLight>> _stray = Several(
        "--stray", "X,Y,WIDTH,HEIGHT,E", "Stray light on part of the camera, photoelectrons a frame; enough of it saturates the region.", 5,
        n => new StrayLight(new PixelRectangle((int)n[0], (int)n[1], (int)n[2], (int)n[3]), n[4]));

    /// <summary>Adds all of them.</summary>
    public void AddTo(Command command)
    {
        Option[] options =
        [
            _seed, _medium, _transmittance, _channels, _thickness, _ballistic, _grain, _signal, _ratio, _shape, _gain, _readNoise, _fullWell, _offset,
            _prnu, _dsnu, _dead, _hot, _walk, _linear, _sine, _jump, _powerLinear, _powerWalk, _powerNoise, _decorrelation, _stepScale, _stepJitter,
            _fault, _stray,
        ];
        foreach (Option option in options)
        {
            command.Add(option);
        }
    }

    /// <summary>What was given, typed.</summary>
    public BenchRequest Read(ParseResult parse) => new()
    {
        Seed = (ulong)parse.GetValue(_seed),
        Medium = parse.GetValue(_medium) ?? Standard.Medium,
        MeanTransmittance = parse.GetValue(_transmittance),
        Channels = parse.GetValue(_channels),
        ThicknessMacroPixels = parse.GetValue(_thickness),
        BallisticFraction = parse.GetValue(_ballistic),
        GrainPixels = parse.GetValue(_grain),
        SignalElectrons = parse.GetValue(_signal),
        ReferenceRatio = parse.GetValue(_ratio),
        ReferenceShape = parse.GetValue(_shape) ?? Standard.ReferenceShape,
        ElectronsPerCount = parse.GetValue(_gain),
        ReadNoiseElectrons = parse.GetValue(_readNoise),
        FullWellElectrons = parse.GetValue(_fullWell),
        OffsetCounts = parse.GetValue(_offset),
        PrnuRelative = parse.GetValue(_prnu),
        DsnuElectrons = parse.GetValue(_dsnu),
        DeadPixels = parse.GetValue(_dead),
        HotPixels = parse.GetValue(_hot),
        WalkRadPerSqrtSecond = parse.GetValue(_walk),
        OtherDrift = [.. ReadDrift(parse)],
        Power = new PowerDrift(parse.GetValue(_powerLinear), parse.GetValue(_powerWalk), parse.GetValue(_powerNoise)),
        DecorrelationTimeS = parse.GetValue(_decorrelation),
        Steps = new StepError(LinearScale: parse.GetValue(_stepScale), JitterRad: parse.GetValue(_stepJitter)),
        Faults = Given(parse, _fault),
        Stray = Given(parse, _stray).FirstOrDefault(),
    };

    private static ImmutableArray<T> Given<T>(ParseResult parse, Option<ImmutableArray<T>> option) =>
        parse.GetValue(option) is { IsDefault: false } values ? values : [];

    private static Option<double?> Planned(string name, string unit, double minimum, double maximum, string description) =>
        NumberOptions.Optional(name, unit, minimum, maximum, $"{description.TrimEnd('.')} (as planned when not given).");

    private static Option<ImmutableArray<T>> Several<T>(string name, string form, string description, int count, Func<double[], T> make) => new(name)
    {
        Description = description,
        HelpName = form,
        Arity = ArgumentArity.OneOrMore,
        CustomParser = result =>
        {
            var values = ImmutableArray.CreateBuilder<T>();
            foreach (string text in result.Tokens.Select(t => t.Value))
            {
                if (NumberOptions.Split(text, count) is { } numbers)
                {
                    values.Add(make(numbers));
                }
                else
                {
                    result.AddError($"{name} {text}: not {count} numbers with commas between; write {form}");
                }
            }

            return values.ToImmutable();
        },
    };

    private static ImmutableArray<FrameFault> ParseFaults(ArgumentResult result)
    {
        var faults = ImmutableArray.CreateBuilder<FrameFault>();
        foreach (string text in result.Tokens.Select(t => t.Value))
        {
            string[] parts = text.Split('@');
            if (parts.Length == 2 && Enum.TryParse(parts[0], ignoreCase: true, out FrameFaultKind kind) && Enum.IsDefined(kind)
                && int.TryParse(parts[1], NumberStyles.None, CultureInfo.InvariantCulture, out int frame))
            {
                faults.Add(new FrameFault(kind, frame));
            }
            else
            {
                result.AddError($"--fault {text}: not a fault; write it like dropped@120 (dropped, duplicated, stale, swapped or shaken)");
            }
        }

        return faults.ToImmutable();
    }

    private IEnumerable<PhaseDrift> ReadDrift(ParseResult parse)
    {
        double linear = parse.GetValue(_linear);
        IEnumerable<PhaseDrift> steady = linear == 0 ? [] : [new LinearDrift(linear)];
        return steady.Concat(Given(parse, _sine)).Concat(Given(parse, _jump));
    }
}
