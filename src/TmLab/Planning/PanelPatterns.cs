using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics;
using TmLab.Shaping;

namespace TmLab.Planning;

/// <summary>One image that the panel shows during a measurement.</summary>
/// <param name="Pattern">The pattern k.</param>
/// <param name="Step">The phase step that the panel adds; −1 where another device steps.</param>
/// <param name="Name">A file name without ending; sorts in the order of the first showing of unrepaired plans.</param>
public sealed record PanelImage(int Pattern, int Step, string Name);

/// <summary>
/// The images of a plan: on a phase panel the phase of B[k, n], plus the step where the panel itself steps, by the nearest grey level;
/// on an amplitude panel 0 (off) and 1 (on), one bit a panel pixel.
/// </summary>
public sealed class PanelPatterns
{
    /// <summary>How far an element may lie from what the panel can show.</summary>
    private const double Tolerance = 1e-6;

    private readonly PlanSettings _settings;
    private readonly IPatternBasis _basis;
    private readonly GrayScale _scale;

    /// <summary>Takes a plan's settings.</summary>
    public PanelPatterns(PlanSettings settings)
    {
        _settings = settings;
        _basis = PatternBases.Create(settings.Modes, settings.CustomPatterns);
        _scale = new GrayScale(settings.PhaseLut);
    }

    /// <summary>All images that a schedule needs, each once, patterns rising.</summary>
    public ImmutableArray<PanelImage> Images(Schedule schedule) =>
        [.. schedule.Groups.Select(g => g.Mode).Distinct().Order().SelectMany(ImagesOf)];

    /// <summary>The image during a frame; null where the panel does not matter (dark and reference frames).</summary>
    public PanelImage? Shown(in ScheduledFrame frame) => frame.Role switch
    {
        FrameRole.Dark or FrameRole.Reference => null,
        FrameRole.Blank => ImageOf(_settings.TrackerPattern, 0),
        _ => ImageOf(frame.Mode, frame.Step),
    };

    /// <summary>Draws an image at the panel's native size: region and flatness honoured.</summary>
    public ModulatorImage Draw(PanelImage image)
    {
        Preconditions.InRange(image.Pattern, 0, _basis.PatternCount - 1);
        if (_settings.Modulator.Kind == ModulatorKind.Amplitude)
        {
            ImmutableArray<byte> on = [.. Elements(image.Pattern).Select(b => (byte)Math.Round(b.Real))];
            ModulatorImage drawn = PanelDrawing.Draw(_settings.Modulator, _settings.Modes.Grid, on, []);
            return new ModulatorImage(drawn.Size, drawn.Levels, ModulatorImageDepth.OneBit);
        }

        double step = image.Step < 0 ? 0 : 2 * Math.PI * image.Step / _settings.Steps;
        var known = new Dictionary<double, byte>();
        ImmutableArray<byte> levels = [.. Elements(image.Pattern).Select(b => Gray(b.Phase + step, known))];
        return PanelDrawing.Draw(_settings.Modulator, _settings.Modes.Grid, levels, _settings.Flatness);
    }

    /// <summary>Refuses bases that the kind of panel cannot show.</summary>
    internal static void CheckShowable(PlanSettings settings, string file)
    {
        bool isPhase = settings.Modulator.Kind == ModulatorKind.Phase;
        bool showable = settings.Modes.Basis switch
        {
            BasisKind.Hadamard or BasisKind.Fourier => isPhase,
            BasisKind.HadamardBinary or BasisKind.Pixel => !isPhase,
            _ => settings.CustomPatterns.All(b => isPhase ? Math.Abs(b.Magnitude - 1) < Tolerance : IsSwitch(b)),
        };
        if (!showable)
        {
            throw new BadInputException(
                file, "modes.basis",
                isPhase ? "a phase panel shows fields of modulus 1 only, and the patterns have others" : "an amplitude panel of one bit shows on and off only, and the patterns have other fields",
                isPhase ? "use hadamard or fourier, or an amplitude panel" : "use hadamard-binary or pixel, or a phase panel");
        }
    }

    private static bool IsSwitch(Complex b) => Complex.Abs(b) < Tolerance || Complex.Abs(b - 1) < Tolerance;

    private IEnumerable<Complex> Elements(int pattern) => Enumerable.Range(0, _basis.ModeCount).Select(n => _basis.Element(pattern, n));

    /// <summary>Most patterns have few phases; each is looked up once an image.</summary>
    private byte Gray(double phaseRad, Dictionary<double, byte> known)
    {
        if (!known.TryGetValue(phaseRad, out byte gray))
        {
            gray = _scale.Nearest(phaseRad).Gray;
            known[phaseRad] = gray;
        }

        return gray;
    }

    private IEnumerable<PanelImage> ImagesOf(int pattern) =>
        _settings.StepDevice == StepDevice.Panel
            ? Enumerable.Range(0, _settings.Steps).Select(s => ImageOf(pattern, s))
            : [ImageOf(pattern, 0)];

    private PanelImage ImageOf(int pattern, int step) => _settings.StepDevice == StepDevice.Panel
        ? new PanelImage(pattern, step, FormattableString.Invariant($"pattern-{pattern:D6}-step-{step:D2}"))
        : new PanelImage(pattern, -1, FormattableString.Invariant($"pattern-{pattern:D6}"));
}
