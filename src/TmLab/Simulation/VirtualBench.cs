using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>
/// A simulated bench: any frame of a scheduled measurement on request, and the truth behind it. A frame is
/// I = (|R|² + |E|² + 2 Re(R* E e^{i(±δ + φ)})) g + stray light, in photoelectrons, seen by the camera of
/// <see cref="SimulatedCamera"/>; δ is the step that really happened, plus when the signal arm is stepped and minus when the
/// reference arm is, φ the drift, g the power. The same settings, manifest and schedule give the same bytes whatever the
/// number of threads, the order of requests and the machine. Safe to use from several threads.
/// </summary>
public sealed class VirtualBench : IDisposable
{
    private readonly BenchSettings _settings;
    private readonly Schedule _schedule;
    private readonly SteppedArm _arm;
    private readonly BenchOptics _optics;
    private readonly FrameConditions _conditions;
    private readonly CameraModel _camera;
    private readonly int[] _delivered;

    private VirtualBench(BenchSettings settings, MeasurementManifest manifest, Schedule schedule, ImageSize size, BenchOptics optics)
    {
        _settings = settings;
        _schedule = schedule;
        _arm = manifest.SteppedArm;
        _optics = optics;
        FrameSize = size;
        _conditions = new FrameConditions(settings, schedule);
        _camera = new CameraModel(settings.Camera, size, manifest.Camera.BitDepth, new RandomStreams(settings.Seed));
        _delivered = FrameFault.Deliver(schedule.Frames.Length, settings.Faults);
        Truth = MakeTruth();
    }

    /// <summary>Number of frames.</summary>
    public int FrameCount => _schedule.Frames.Length;

    /// <summary>Size of every frame.</summary>
    public ImageSize FrameSize { get; }

    /// <summary>What the measurement should find.</summary>
    public BenchTruth Truth { get; }

    /// <summary>Sets up a bench: draws the medium and computes the fields of all patterns.</summary>
    /// <param name="settings">The bench.</param>
    /// <param name="manifest">Frame size (required here), bit depth, patterns and stepped arm are taken from it.</param>
    /// <param name="schedule">The frames.</param>
    /// <param name="customPatterns">Pattern matrix B, row-major, for custom patterns; default otherwise.</param>
    /// <param name="threads">Largest number of threads; 0 for one a processor.</param>
    /// <param name="cancellation">Stops the work.</param>
    /// <exception cref="ArgumentException">The settings contradict each other, the manifest or the schedule.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static VirtualBench Create(
        BenchSettings settings,
        MeasurementManifest manifest,
        Schedule schedule,
        ImmutableArray<Complex> customPatterns = default,
        int threads = 0,
        CancellationToken cancellation = default)
    {
        ImageSize size = BenchChecks.Check(settings, manifest, schedule, customPatterns);
        BenchOptics optics = BenchOptics.Create(settings, manifest, size, customPatterns, BenchThreads.Options(threads, cancellation));
        try
        {
            return new VirtualBench(settings, manifest, schedule, size, optics);
        }
        catch
        {
            optics.Dispose();
            throw;
        }
    }

    /// <summary>The counts at one place of the file, row-major.</summary>
    /// <param name="place">0 … FrameCount−1.</param>
    /// <param name="counts">Receives the counts; at least one frame long.</param>
    public void Render(int place, Span<ushort> counts)
    {
        Preconditions.InRange(place, 0, FrameCount - 1);
        Preconditions.AtLeast(counts.Length, FrameSize.PixelCount);
        float[] electrons = System.Buffers.ArrayPool<float>.Shared.Rent(FrameSize.PixelCount);
        Span<float> mean = electrons.AsSpan(0, FrameSize.PixelCount);
        MeanElectronsOfScheduled(_delivered[place], mean);
        _camera.Expose(mean, _delivered[place], counts);
        System.Buffers.ArrayPool<float>.Shared.Return(electrons);
    }

    /// <summary>The light at one place of the file before the camera: mean photoelectrons of an ideal pixel, no noise, no limit.</summary>
    /// <param name="place">0 … FrameCount−1.</param>
    /// <param name="electrons">Receives the light, row-major; at least one frame long.</param>
    public void MeanElectrons(int place, Span<float> electrons)
    {
        Preconditions.InRange(place, 0, FrameCount - 1);
        Preconditions.AtLeast(electrons.Length, FrameSize.PixelCount);
        MeanElectronsOfScheduled(_delivered[place], electrons[..FrameSize.PixelCount]);
    }

    /// <summary>Renders all frames into memory.</summary>
    /// <param name="threads">Largest number of threads; 0 for one a processor.</param>
    /// <param name="progress">Told of the frames done.</param>
    /// <param name="cancellation">Stops the work.</param>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public RecordedFrames Record(
        int threads = 0, IProgress<StageProgress>? progress = null, CancellationToken cancellation = default)
    {
        var frames = new RecordedFrames(FrameCount, FrameSize);
        int done = 0;
        try
        {
            Parallel.For(0, FrameCount, BenchThreads.Options(threads, cancellation), place =>
            {
                Render(place, frames.Writable(place));
                progress?.Report(new StageProgress("simulating frames", Interlocked.Increment(ref done), FrameCount, "frames"));
            });
            return frames;
        }
        catch
        {
            frames.Dispose();
            throw;
        }
    }

    /// <summary>The frames from front to back, as a bench delivers them; rendered a few at a time. The bench must outlive the source.</summary>
    /// <param name="threads">Largest number of threads; 0 for one a processor.</param>
    public IFrameSource OpenFrames(int threads = 0) => new VirtualFrameSource(this, threads);

    /// <inheritdoc/>
    public void Dispose() => _optics.Dispose();

    private void MeanElectronsOfScheduled(int frame, Span<float> electrons)
    {
        ScheduledFrame scheduled = _schedule.Frames[frame];
        if (scheduled.Role == FrameRole.Dark)
        {
            electrons.Clear();
            return;
        }

        FrameLight light = LightOf(scheduled);
        FrameFields fields = new(_optics, Math.Max(scheduled.Mode, 0));
        light.Accumulate(fields, electrons);
        AddStray(light.Power, electrons);
    }

    private FrameLight LightOf(in ScheduledFrame scheduled)
    {
        double step = scheduled.IsStepped ? _conditions.StepPhaseRad[scheduled.Index] : 0;
        double phaseRad = _conditions.DriftPhaseRad[scheduled.Index] + (_arm == SteppedArm.Signal ? step : -step);
        return new FrameLight(
            _conditions.Power[scheduled.Index],
            phaseRad,
            _conditions.Contrast[scheduled.Index],
            _conditions.FieldCorrelation[scheduled.Index],
            HasReference: scheduled.Role != FrameRole.Blank,
            HasSignal: scheduled.Role != FrameRole.Reference);
    }

    private void AddStray(double power, Span<float> electrons)
    {
        if (_settings.Stray is not { } stray)
        {
            return;
        }

        for (int y = stray.Region.Y; y < stray.Region.Y + stray.Region.Height; y++)
        {
            foreach (ref float pixel in electrons.Slice((y * FrameSize.Width) + stray.Region.X, stray.Region.Width))
            {
                pixel += (float)(stray.Electrons * power);
            }
        }
    }

    private BenchTruth MakeTruth() => new(
        _optics.Matrix,
        [.. _optics.ReferenceReal.Zip(_optics.ReferenceImaginary, (re, im) => new Complex64(re, im))],
        _optics.MatrixPerTransmission,
        [.. _delivered.Select(f => _conditions.DriftPhaseRad[f])],
        [.. _delivered.Select(f => _conditions.StepPhaseRad[f])],
        [.. _delivered.Select(f => _conditions.Power[f])],
        [.. _delivered.Select(f => _conditions.FieldCorrelation[f])],
        [.. _delivered],
        [.. _camera.DeadPixels],
        [.. _camera.HotPixels]);
}
