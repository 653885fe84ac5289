using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>
/// The optics of a bench: reference field, and signal fields of all patterns for the medium at the start, for the independent
/// medium it decorrelates towards, and for unscattered light, each only where the settings ask for it.
/// </summary>
internal sealed class BenchOptics : IDisposable
{
    private readonly BenchSettings _settings;
    private readonly MeasurementManifest _manifest;
    private readonly ImageSize _size;
    private readonly Pupil _pupil;
    private readonly RandomStreams _streams;
    private readonly ParallelOptions _options;

    private BenchOptics(BenchSettings settings, MeasurementManifest manifest, ImageSize size, ParallelOptions options)
    {
        _settings = settings;
        _manifest = manifest;
        _size = size;
        _options = options;
        _streams = new RandomStreams(settings.Seed);
        _pupil = Pupil.Create(size, settings.Grain);
        (ReferenceReal, ReferenceImaginary) = MakeReference();
    }

    /// <summary>Fields with the medium at the start, √photoelectrons, row = pattern, column = pixel.</summary>
    public FieldPlanes Start { get; private set; } = null!;

    /// <summary>Scattered fields of the independent medium; null for a sample at rest.</summary>
    public FieldPlanes? Later { get; private set; }

    /// <summary>Unscattered fields, kept where the medium decorrelates and they do not; otherwise null.</summary>
    public FieldPlanes? Unscattered { get; private set; }

    /// <summary>The transmission matrix at the start, pixel × mode.</summary>
    public ComplexMatrix Matrix { get; private set; } = null!;

    /// <summary>Elements of <see cref="Matrix"/> over those of the medium.</summary>
    public double MatrixPerTransmission { get; private set; }

    /// <summary>Real part of the reference, √photoelectrons.</summary>
    public float[] ReferenceReal { get; }

    /// <summary>Imaginary part of the reference, √photoelectrons.</summary>
    public float[] ReferenceImaginary { get; }

    /// <summary>Computes all fields.</summary>
    public static BenchOptics Create(
        BenchSettings settings, MeasurementManifest manifest, ImageSize size, ImmutableArray<Complex> customPatterns, ParallelOptions options)
    {
        var optics = new BenchOptics(settings, manifest, size, options);
        try
        {
            optics.MakeSignal(customPatterns);
            return optics;
        }
        catch
        {
            optics.Dispose();
            throw;
        }
    }

    public void Dispose()
    {
        Start?.Dispose();
        Later?.Dispose();
        Unscattered?.Dispose();
        Matrix?.Dispose();
    }

    private double ElementRms => Math.Sqrt(_settings.MeanSignalElectrons / _manifest.Modes.ModeCount);

    private void MakeSignal(ImmutableArray<Complex> customPatterns)
    {
        bool moves = double.IsFinite(_settings.DecorrelationTimeS);
        using FieldPlanes matrix = Scatter(realisation: 0);
        if (_settings.BallisticFraction > 0)
        {
            using FieldPlanes ballistic = BallisticLight.Draw(_manifest.Modes.Grid, _size);
            ballistic.Scale(Math.Sqrt(_settings.BallisticFraction) * ElementRms);
            matrix.Add(ballistic);
            Unscattered = moves ? PatternFields.Compute(_manifest.Modes, customPatterns, ballistic, _options) : null;
        }

        Matrix = matrix.ToTransposedMatrix();
        Start = PatternFields.Compute(_manifest.Modes, customPatterns, matrix, _options);
        if (moves)
        {
            using FieldPlanes independent = Scatter(realisation: 1);
            Later = PatternFields.Compute(_manifest.Modes, customPatterns, independent, _options);
        }
    }

    /// <summary>The scattered part of the matrix on the camera, one row a mode.</summary>
    private FieldPlanes Scatter(int realisation)
    {
        using var pupilMatrix = new FieldPlanes(_manifest.Modes.ModeCount, _pupil.PointCount);
        var shape = new MediumShape(_manifest.Modes.Grid, _pupil);
        double meanSquare = _settings.Medium.Draw(shape, _streams, realisation, _options, pupilMatrix);

        // The isometry spreads the power of the pupil's points over the pixels.
        double scale = Math.Sqrt((1 - _settings.BallisticFraction) * _size.PixelCount / (meanSquare * _pupil.PointCount)) * ElementRms;
        MatrixPerTransmission = scale;
        pupilMatrix.Scale(scale);
        return ToCamera(pupilMatrix, _settings.Medium.OutputIsIsotropic);
    }

    private FieldPlanes ToCamera(FieldPlanes pupil, bool isIsotropic)
    {
        var camera = new FieldPlanes(pupil.Rows, _size.PixelCount);
        if (isIsotropic && _pupil.IsOpen)
        {
            camera.Add(pupil);
            return camera;
        }

        Parallel.For(0, pupil.Rows, _options, row =>
            _pupil.ToCamera(pupil.Real(row), pupil.Imaginary(row), camera.Real(row), camera.Imaginary(row)));
        return camera;
    }

    private (float[] Real, float[] Imaginary) MakeReference()
    {
        double amplitude = Math.Sqrt(_settings.MeanSignalElectrons * _settings.Reference.IntensityRatio);
        return _settings.Reference.Shape == ReferenceShape.Plane ? PlaneReference(amplitude) : SpeckleReference(amplitude);
    }

    private (float[] Real, float[] Imaginary) PlaneReference(double amplitude)
    {
        float[] re = new float[_size.PixelCount];
        float[] im = new float[_size.PixelCount];
        for (int pixel = 0; pixel < re.Length; pixel++)
        {
            (int y, int x) = Math.DivRem(pixel, _size.Width);
            double phase = (_settings.Reference.TiltXRadPerPixel * x) + (_settings.Reference.TiltYRadPerPixel * y);
            (double sin, double cos) = PortableMath.SinCos(phase);
            (re[pixel], im[pixel]) = ((float)(amplitude * cos), (float)(amplitude * sin));
        }

        return (re, im);
    }

    private (float[] Real, float[] Imaginary) SpeckleReference(double amplitude)
    {
        using var pupilField = new FieldPlanes(1, _pupil.PointCount);
        for (int point = 0; point < _pupil.PointCount; point++)
        {
            (double re, double im) = _streams.ComplexNormal(RandomPurpose.Reference, 0, point);
            (pupilField.Real(0)[point], pupilField.Imaginary(0)[point]) = ((float)re, (float)im);
        }

        pupilField.Scale(amplitude * Math.Sqrt((double)_size.PixelCount / _pupil.PointCount));
        using FieldPlanes camera = ToCamera(pupilField, isIsotropic: true);
        return (camera.Real(0).ToArray(), camera.Imaginary(0).ToArray());
    }
}
