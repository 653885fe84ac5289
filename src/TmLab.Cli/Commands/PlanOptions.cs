using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Quantities;

namespace TmLab.Cli.Commands;

/// <summary>The options of <c>tmlab plan</c> that describe bench and measurement. Defaults are those of <see cref="PlanSettings"/>.</summary>
internal sealed class PlanOptions
{
    private static readonly PlanSettings Standard = new();

    private readonly Option<BasisKind?> _basis = WordOption.Create(
        "--basis", "The set of patterns (hadamard when not given).",
        ("hadamard", BasisKind.Hadamard), ("hadamard-binary", BasisKind.HadamardBinary), ("fourier", BasisKind.Fourier),
        ("pixel", BasisKind.Pixel), ("custom", BasisKind.Custom));

    private readonly Option<HadamardOrdering?> _ordering = WordOption.Create(
        "--ordering", "The numbering of Hadamard patterns (natural when not given).",
        ("natural", HadamardOrdering.Natural), ("sequency", HadamardOrdering.Sequency));

    private readonly Option<GridShape> _grid = SizeOptions.Grid("--grid", Standard.Modes.Grid, "The grid of macro-pixels.");

    private readonly Option<int?> _count =
        NumberOptions.OptionalWhole("--count", "COUNT", 1, 1 << 24, "The number of custom patterns (one a macro-pixel when not given).");

    private readonly Option<ModulatorKind?> _modulator = WordOption.Create(
        "--modulator", "What the panel changes (what the basis needs when not given).",
        ("phase", ModulatorKind.Phase), ("amplitude", ModulatorKind.Amplitude));

    private readonly Option<ImageSize> _panel = SizeOptions.Size("--panel", Standard.Modulator.Size, "The panel's size, panel pixels.");

    private readonly Option<PixelRectangle?> _region =
        SizeOptions.Rectangle("--region", "The part of the panel that carries the macro-pixels (all when not given).");

    private readonly Option<int> _steps =
        NumberOptions.Whole("--steps", "COUNT", StepChecks.FewestSteps, 1000, Standard.Steps, "The number of equal phase steps.");

    private readonly Option<StepDevice?> _stepBy = WordOption.Create(
        "--step-by", "What carries the phase steps (a phase panel itself, otherwise the reference, when not given).",
        ("panel", StepDevice.Panel), ("signal", StepDevice.SignalArm), ("reference", StepDevice.ReferenceArm));

    private readonly Option<ImageSize> _camera = SizeOptions.Size("--camera", Standard.Camera.Size, "The camera region, pixels.");
    private readonly Option<int> _bitDepth = NumberOptions.Whole("--bit-depth", "BITS", 1, 16, Standard.Camera.BitDepth, "The camera's bits a pixel.");

    private readonly Option<double> _gain = NumberOptions.Number(
        "--electrons-per-count", "E", 1e-6, 1e9, Standard.Camera.ElectronsPerCount, "The camera's photoelectrons a count.");

    private readonly Option<double> _readNoise = NumberOptions.Number(
        "--read-noise", "E", 0, 1e6, Standard.Camera.ReadNoiseElectrons, "The camera's read noise, photoelectrons r.m.s.");

    private readonly Option<double> _fullWell = NumberOptions.Number(
        "--full-well", "E", 1, 1e12, Standard.Camera.FullWellElectrons, "The photoelectrons at which a pixel is full.");

    private readonly Option<double> _offset = NumberOptions.Number(
        "--offset", "COUNTS", 0, ushort.MaxValue, Standard.Camera.OffsetCounts, "The camera's counts in darkness.");

    private readonly Option<double> _signal = NumberOptions.Number(
        "--signal", "E", 1e-6, 1e9, Standard.SignalElectrons, "The mean signal without reference, photoelectrons a pixel a frame.");

    private readonly Option<double> _reference = NumberOptions.Number(
        "--reference", "E", 1e-6, 1e9, Standard.ReferenceElectrons, "The mean reference without signal, photoelectrons a pixel a frame.");

    private readonly Option<double> _rate = NumberOptions.Number("--rate", "HZ", 1e-6, 1e9, Standard.FrameRateHz, "The frames a second.");

    private readonly Option<double> _drift = NumberOptions.Number(
        "--drift", "RAD", 0, 1e6, Standard.DriftRadPerSqrtSecond, "The expected drift, radians r.m.s. in one second (a random walk).");

    private readonly Option<double?> _decorrelation = NumberOptions.Optional(
        "--decorrelation-time", "S", 1e-9, 1e12, "The time in which the sample's field correlation falls to 1/e (at rest when not given).");

    private readonly Option<int> _tracker = NumberOptions.Whole("--tracker-pattern", "K", 0, 1 << 24, 0, "The pattern that is tracked.");

    private readonly Option<int?> _every = NumberOptions.OptionalWhole(
        "--trackers-every", "MODES", 0, 1 << 24, "The modes between two trackers, 0 for none (chosen and explained when not given).");

    private readonly Option<int> _dark = NumberOptions.Whole("--dark-frames", "COUNT", 0, 1 << 20, Standard.DarkFrames, "The dark frames.");

    private readonly Option<int> _references = NumberOptions.Whole(
        "--reference-frames", "COUNT", 0, 1 << 20, Standard.ReferenceFrames, "The frames of the reference alone.");

    private readonly Option<int> _blank = NumberOptions.Whole(
        "--blank-frames", "COUNT", 0, 1 << 20, Standard.BlankFrames, "The frames of the signal alone.");

    private readonly Option<string?> _title = new("--title") { Description = "A line for people.", HelpName = "TEXT" };
    private readonly Option<double?> _wavelength = NumberOptions.Optional("--wavelength", "NM", 1, 1e6, "The vacuum wavelength, nanometres.");

    /// <summary>Adds all of them.</summary>
    public void AddTo(Command command)
    {
        Option[] options =
        [
            _basis, _ordering, _grid, _count, _modulator, _panel, _region, _steps, _stepBy, _camera, _bitDepth, _gain, _readNoise, _fullWell,
            _offset, _signal, _reference, _rate, _drift, _decorrelation, _tracker, _every, _dark, _references, _blank, _title, _wavelength,
        ];
        foreach (Option option in options)
        {
            command.Add(option);
        }
    }

    /// <summary>What was given, typed.</summary>
    public PlanSettings Read(ParseResult parse)
    {
        BasisKind basis = parse.GetValue(_basis) ?? BasisKind.Hadamard;
        ModulatorKind kind = parse.GetValue(_modulator) ?? KindFor(basis);
        GridShape grid = parse.GetValue(_grid);
        ImageSize panel = parse.GetValue(_panel);
        return new PlanSettings
        {
            Title = parse.GetValue(_title),
            WavelengthNm = parse.GetValue(_wavelength),
            Modes = new ModeDescription(
                basis, parse.GetValue(_ordering) ?? HadamardOrdering.Natural, parse.GetValue(_count) ?? grid.Count, grid, null, null),
            Modulator = new ModulatorDescription(
                kind, panel, parse.GetValue(_region) ?? new PixelRectangle(0, 0, panel.Width, panel.Height), null, null, null),
            Steps = parse.GetValue(_steps),
            StepDevice = parse.GetValue(_stepBy) ?? (kind == ModulatorKind.Phase ? StepDevice.Panel : StepDevice.ReferenceArm),
            Camera = ReadCamera(parse),
            SignalElectrons = parse.GetValue(_signal),
            ReferenceElectrons = parse.GetValue(_reference),
            FrameRateHz = parse.GetValue(_rate),
            DriftRadPerSqrtSecond = parse.GetValue(_drift),
            DecorrelationTimeS = parse.GetValue(_decorrelation) ?? double.PositiveInfinity,
            TrackerPattern = parse.GetValue(_tracker),
            TrackerEveryModes = parse.GetValue(_every),
            DarkFrames = parse.GetValue(_dark),
            ReferenceFrames = parse.GetValue(_references),
            BlankFrames = parse.GetValue(_blank),
        };
    }

    private static ModulatorKind KindFor(BasisKind basis) =>
        basis is BasisKind.HadamardBinary or BasisKind.Pixel ? ModulatorKind.Amplitude : ModulatorKind.Phase;

    private PlannedCamera ReadCamera(ParseResult parse) => new(
        parse.GetValue(_camera),
        parse.GetValue(_bitDepth),
        parse.GetValue(_gain),
        parse.GetValue(_readNoise),
        parse.GetValue(_fullWell),
        Math.Min(parse.GetValue(_offset), (1 << parse.GetValue(_bitDepth)) - 2));
}
