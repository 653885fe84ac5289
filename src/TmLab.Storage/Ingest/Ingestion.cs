using System.Collections.Immutable;
using System.IO.Hashing;
using System.Runtime.InteropServices;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Numerics;
using TmLab.Quantities;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Ingest;

/// <summary>The first stage: frames from the bench's files into a sink, in one pass, two frames in memory at a time.</summary>
public static class Ingestion
{
    private const int ProgressReports = 200;

    /// <summary>
    /// Streams all frames, checks them against the bit depth, gathers the facts of each and the mean dark frame, refuses measurements
    /// without light or wholly saturated, and completes the sink. The next frame is read while one is written.
    /// </summary>
    /// <param name="measurement">An opened measurement, none of whose frames has been read.</param>
    /// <param name="sink">Where the frames go. It is completed only if nothing was wrong.</param>
    /// <param name="progress">Is told of frames done.</param>
    /// <param name="cancel">Stops between two frames.</param>
    /// <returns>The facts that the sink was completed with.</returns>
    /// <exception cref="BadInputException">A frame is damaged or holds counts above the bit depth, or no reconstruction could help.</exception>
    /// <exception cref="OperationCanceledException">Cancellation was asked for.</exception>
    public static MeasurementFacts Run(
        OpenedMeasurement measurement, IMeasurementSink sink, IProgress<StageProgress>? progress = null, CancellationToken cancel = default)
    {
        Preconditions.SameLength(measurement.Schedule.Frames.Length, measurement.Frames.FrameCount);
        var gathered = new GatheredFacts(measurement);
        var current = new ushort[measurement.Frames.FrameSize.PixelCount];
        var following = new ushort[current.Length];
        int frameCount = measurement.Frames.FrameCount;
        (string File, string Place) place = measurement.Frames.NextFrame;
        measurement.Frames.ReadNext(current);
        for (int frame = 0; frame < frameCount; frame++)
        {
            cancel.ThrowIfCancellationRequested();
            (string File, string Place) nextPlace = measurement.Frames.NextFrame;
            Task reading = frame + 1 < frameCount ? StartReading(measurement.Frames, following) : Task.CompletedTask;
            try
            {
                gathered.Take(frame, current, place);
                sink.WriteFrame(frame, current);
            }
            finally
            {
                // The source must be at rest before anyone closes it.
                ((IAsyncResult)reading).AsyncWaitHandle.WaitOne();
            }

            reading.GetAwaiter().GetResult();
            (current, following) = (following, current);
            place = nextPlace;
            Report(progress, frame + 1, frameCount);
        }

        MeasurementFacts facts = gathered.Finish();
        sink.Complete(facts);
        return facts;
    }

    private static Task StartReading(IFrameSource frames, ushort[] destination) => Task.Run(() => frames.ReadNext(destination));

    private static void Report(IProgress<StageProgress>? progress, int done, int total)
    {
        if (progress is not null && (done == total || done % Math.Max(1, total / ProgressReports) == 0))
        {
            progress.Report(new StageProgress("reading frames", done, total, "frames"));
        }
    }
}

/// <summary>Gathers the facts of frames as they pass.</summary>
internal sealed class GatheredFacts
{
    private readonly OpenedMeasurement _measurement;
    private readonly ImmutableArray<FrameFacts>.Builder _facts;
    private readonly double[] _darkSum;
    private readonly ushort _fullScale;
    private int _darkFrames;

    public GatheredFacts(OpenedMeasurement measurement)
    {
        _measurement = measurement;
        _facts = ImmutableArray.CreateBuilder<FrameFacts>(measurement.Frames.FrameCount);
        _darkSum = new double[measurement.Frames.FrameSize.PixelCount];
        _fullScale = (ushort)measurement.Manifest.Camera.FullScaleCounts;
    }

    /// <summary>Takes the next frame.</summary>
    public void Take(int frame, ReadOnlySpan<ushort> counts, (string File, string Place) place)
    {
        CountPass pass = CountPass.Over(counts, _fullScale);
        if (pass.Largest > _fullScale)
        {
            throw AboveBitDepth(frame, counts, place);
        }

        _facts.Add(new FrameFacts(
            (float)((double)pass.Sum / counts.Length), (float)((double)pass.Saturated / counts.Length), Crc32Of(counts)));
        if (_measurement.Schedule.Frames[frame].Role == FrameRole.Dark)
        {
            AddDark(counts);
        }
    }

    /// <summary>Checks the exposure and makes the facts.</summary>
    public MeasurementFacts Finish()
    {
        ImmutableArray<FrameFacts> facts = _facts.MoveToImmutable();
        ImmutableArray<InputProblem> problems = ExposureChecks.Check(facts, _measurement.Schedule, _measurement.FramesName);
        if (!problems.IsEmpty)
        {
            throw new BadInputException(problems);
        }

        float[] dark = Array.ConvertAll(_darkSum, sum => (float)(sum / Math.Max(1, _darkFrames)));
        return new MeasurementFacts(
            _measurement.Manifest, _measurement.Frames.FrameSize, _measurement.Schedule, facts, ImmutableCollectionsMarshal.AsImmutableArray(dark),
            _measurement.CustomPatterns, _measurement.PhaseLut, _measurement.Flatness);
    }

    private static uint Crc32Of(ReadOnlySpan<ushort> counts)
    {
        if (BitConverter.IsLittleEndian)
        {
            return Crc32.HashToUInt32(MemoryMarshal.AsBytes(counts));
        }

        var swapped = new ushort[counts.Length];
        System.Buffers.Binary.BinaryPrimitives.ReverseEndianness(counts, swapped);
        return Crc32.HashToUInt32(MemoryMarshal.AsBytes(swapped.AsSpan()));
    }

    private void AddDark(ReadOnlySpan<ushort> counts)
    {
        _darkFrames++;
        for (int i = 0; i < counts.Length; i++)
        {
            _darkSum[i] += counts[i];
        }
    }

    private BadInputException AboveBitDepth(int frame, ReadOnlySpan<ushort> counts, (string File, string Place) place)
    {
        int at = counts.IndexOfAnyInRange((ushort)(_fullScale + 1), ushort.MaxValue);
        ImageSize size = _measurement.Frames.FrameSize;
        var pixel = new CameraPixel(at % size.Width, at / size.Width);
        int bits = _measurement.Manifest.Camera.BitDepth;
        return new BadInputException(
            place.File, $"{place.Place} (frame {frame}), pixel {pixel}", $"the count {counts[at]} is above {_fullScale}, the most that {bits} bits hold",
            "correct camera.bit_depth, or save frames with the counts in the low bits");
    }
}
