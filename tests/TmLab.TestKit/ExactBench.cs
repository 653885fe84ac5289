using System.Collections.Immutable;
using System.Numerics;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.TestKit;

/// <summary>
/// A bench without noise, straight from the model of the conventions: I = |R + E e^{i(δ + φ)}|² with E = T Bᵀ by a dense product,
/// rounded to 16-bit counts. Kept simple and apart from the simulator, so that it can judge reconstruction.
/// </summary>
public sealed class ExactBench
{
    private readonly Random _random;

    /// <summary>Draws a medium and records all frames.</summary>
    /// <param name="modes">The basis.</param>
    /// <param name="schedule">The frames.</param>
    /// <param name="size">The camera region.</param>
    /// <param name="seed">Seed of the medium.</param>
    /// <param name="arm">Which arm is stepped.</param>
    /// <param name="driftRad">φ at each frame; null for none.</param>
    /// <param name="referenceCounts">|R|² at each pixel; null for 8,000 everywhere.</param>
    /// <param name="customPatterns">B for custom patterns.</param>
    public ExactBench(
        ModeDescription modes,
        Schedule schedule,
        ImageSize size,
        int seed,
        SteppedArm arm = SteppedArm.Signal,
        Func<ScheduledFrame, double>? driftRad = null,
        Func<int, double>? referenceCounts = null,
        ImmutableArray<Complex> customPatterns = default)
    {
        _random = new Random(seed);
        Basis = PatternBases.Create(modes, customPatterns);
        driftRad ??= _ => 0;
        referenceCounts ??= _ => 8000;
        Matrix = new Complex[size.PixelCount, modes.ModeCount];
        for (int p = 0; p < size.PixelCount; p++)
        {
            for (int n = 0; n < modes.ModeCount; n++)
            {
                Matrix[p, n] = Normal() * Math.Sqrt(1500.0 / modes.ModeCount);
            }
        }

        double sign = arm == SteppedArm.Signal ? 1 : -1;
        Frames = [.. schedule.Frames.Select(f => Record(f, size.PixelCount, (sign * f.PhaseRad) + driftRad(f), referenceCounts))];
        Facts = new MeasurementFacts(
            Manifest(modes, size, arm), size, schedule, [.. schedule.Frames.Select(_ => default(FrameFacts))], [.. new float[size.PixelCount]],
            customPatterns.IsDefault ? [] : customPatterns, null, []);
        Reader = new InMemoryFrames(Frames, size);
    }

    public IPatternBasis Basis { get; }

    /// <summary>T[p, n].</summary>
    public Complex[,] Matrix { get; }

    public ushort[][] Frames { get; }

    public MeasurementFacts Facts { get; }

    public InMemoryFrames Reader { get; }

    /// <summary>The same measurement with another camera.</summary>
    public MeasurementFacts FactsWith(CameraDescription camera) => Facts with { Manifest = Facts.Manifest with { Camera = camera } };

    /// <summary>Mean fidelity of the rows given: |⟨a, b⟩|²/(⟨a,a⟩⟨b,b⟩), the definition in the conventions.</summary>
    public double Fidelity(InMemoryMatrix measured, TransmissionMatrixFacts facts) =>
        Enumerable.Range(0, measured.RowCount).Where(p => facts.Pixels.Valid[p]).Average(p => RowFidelity(measured, p));

    private double RowFidelity(InMemoryMatrix measured, int row)
    {
        Complex overlap = 0;
        double a = 0, b = 0;
        ReadOnlySpan<Complex64> m = measured.Row(row);
        for (int n = 0; n < m.Length; n++)
        {
            overlap += m[n].ToComplex() * Complex.Conjugate(Matrix[row, n]);
            a += m[n].SquaredMagnitude;
            b += Square(Matrix[row, n]);
        }

        return Square(overlap) / (a * b);
    }

    private static double Square(Complex z) => (z.Real * z.Real) + (z.Imaginary * z.Imaginary);

    private ushort[] Record(ScheduledFrame frame, int pixels, double theta, Func<int, double> referenceCounts)
    {
        var counts = new ushort[pixels];
        for (int p = 0; p < pixels; p++)
        {
            Complex signal = 0;
            for (int n = 0; frame.IsStepped && n < Matrix.GetLength(1); n++)
            {
                signal += Basis.Element(frame.Mode, n) * Matrix[p, n];
            }

            Complex reference = frame.Role is FrameRole.Dark or FrameRole.Blank ? 0 : Math.Sqrt(referenceCounts(p));
            Complex field = reference + (frame.IsStepped ? signal * Complex.FromPolarCoordinates(1, theta) : 0);
            counts[p] = (ushort)Math.Min(65535, Math.Round(Square(field)));
        }

        return counts;
    }

    private Complex Normal() => Complex.FromPolarCoordinates(
        Math.Sqrt(-Math.Log(1 - _random.NextDouble())), 2 * Math.PI * _random.NextDouble());

    private static MeasurementManifest Manifest(ModeDescription modes, ImageSize size, SteppedArm arm) => new(
        "exact bench",
        633,
        new CameraDescription(size, 16, null, null, null),
        new FrameLocation(FrameStorageKind.Raw, ["frames.raw"], null, RawPixelFormat.UInt16LittleEndian, 0),
        new ScheduleLocation("schedule.csv", null, 0),
        modes,
        new ModulatorDescription(ModulatorKind.Phase, new ImageSize(64, 64), new PixelRectangle(0, 0, 64, 64), null, null, null),
        arm,
        null,
        null);
}
