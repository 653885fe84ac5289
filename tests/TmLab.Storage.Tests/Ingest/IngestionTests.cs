using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Storage.Ingest;
using TmLab.Storage.Manifest;
using Xunit;

namespace TmLab.Storage.Tests.Ingest;

public sealed class IngestionTests
{
    private const int Bits = 12;
    private const int FullScale = 4095;

    private static readonly ImageSize Size = new(9, 4);

    [Fact]
    public void Frames_arrive_in_order_and_the_facts_are_theirs()
    {
        ushort[][] frames = [.. SampleFrames.Make(2, Size, bits: 4), .. SampleFrames.Make(12, Size, Bits)];
        var sink = new RecordingSink();
        MeasurementFacts facts = Run(Measurement(frames, darkFrames: 2), sink);
        Assert.Equal(frames, sink.Frames);
        Assert.Same(facts, sink.Facts);
        for (int i = 0; i < frames.Length; i++)
        {
            Assert.Equal((float)frames[i].Average(c => (double)c), facts.FrameFacts[i].MeanCount);
            Assert.Equal((float)((double)frames[i].Count(c => c == FullScale) / Size.PixelCount), facts.FrameFacts[i].SaturatedFraction);
        }

        Assert.Equal(Enumerable.Range(0, Size.PixelCount).Select(p => (frames[0][p] + frames[1][p]) / 2f), facts.DarkCounts);
    }

    /// <summary>The check value of CRC-32 (IEEE 802.3, ITU-T V.42): "123456789" gives CBF43926; here with a tenth byte by the bitwise definition.</summary>
    [Fact]
    public void The_checksum_is_the_published_crc_of_little_endian_counts()
    {
        Assert.Equal(0xCBF43926u, BitwiseCrc32("123456789"u8));
        ushort[][] frames = SampleFrames.Make(12, Size, Bits);
        MeasurementFacts facts = Run(Measurement(frames, 0), new RecordingSink());
        byte[] bytes = [.. frames[3].SelectMany(c => new[] { (byte)c, (byte)(c >> 8) })];
        Assert.Equal(BitwiseCrc32(bytes), facts.FrameFacts[3].Crc32);
    }

    [Fact]
    public void A_count_above_the_bit_depth_is_named_with_frame_pixel_and_value()
    {
        ushort[][] frames = SampleFrames.Make(12, Size, Bits);
        frames[5][Size.Width + 3] = 4096;
        var sink = new RecordingSink();
        BadInputException bad = Assert.Throws<BadInputException>(() => Run(Measurement(frames, 0), sink));
        Assert.StartsWith("memory, frame 5 (frame 5), pixel 3,1: the count 4096 is above 4095, the most that 12 bits hold", bad.Message, StringComparison.Ordinal);
        Assert.Null(sink.Facts);
    }

    [Fact]
    public void Frames_without_light_are_refused()
    {
        ushort[][] black = [.. Enumerable.Range(0, 12).Select(_ => new ushort[Size.PixelCount])];
        Assert.Contains("the frames are all dark", Refused(black, 0), StringComparison.Ordinal);
        var random = new Random(3);
        ushort[][] offset = [.. Enumerable.Range(0, 16).Select(_ => Enumerable.Range(0, Size.PixelCount).Select(_ => (ushort)random.Next(95, 106)).ToArray())];
        Assert.Contains("no light above the dark level", Refused(offset, 4), StringComparison.Ordinal);
    }

    [Fact]
    public void Wholly_saturated_frames_are_refused()
    {
        ushort[][] frames = [.. Enumerable.Range(0, 12).Select(_ => Enumerable.Repeat((ushort)FullScale, Size.PixelCount).ToArray())];
        Assert.Contains("the frames are saturated", Refused(frames, 0), StringComparison.Ordinal);
    }

    [Fact]
    public void A_camera_that_repeats_one_frame_is_refused()
    {
        ushort[] one = SampleFrames.Make(1, Size, Bits)[0];
        Assert.Contains("the camera did not deliver new frames", Refused([.. Enumerable.Repeat(one, 12)], 0), StringComparison.Ordinal);
    }

    [Fact]
    public void Cancellation_stops_and_completes_nothing()
    {
        using var cancel = new CancellationTokenSource();
        var sink = new RecordingSink(frame =>
        {
            if (frame == 4)
            {
                cancel.Cancel();
            }
        });
        Assert.ThrowsAny<OperationCanceledException>(() => Ingestion.Run(Measurement(SampleFrames.Make(12, Size, Bits), 0), sink, cancel: cancel.Token));
        Assert.Equal(5, sink.Frames.Count);
        Assert.Null(sink.Facts);
    }

    [Fact]
    public void Progress_ends_at_all_frames()
    {
        var reports = new List<StageProgress>();
        Run(Measurement(SampleFrames.Make(12, Size, Bits), 0), new RecordingSink(), new Recorder(reports));
        Assert.Equal(new StageProgress("reading frames", 12, 12, "frames"), reports[^1]);
    }

    [Fact]
    public void A_failure_of_the_next_frame_is_reported_after_the_frames_before_it()
    {
        var sink = new RecordingSink();
        OpenedMeasurement measurement = Measurement(SampleFrames.Make(12, Size, Bits), 0, failAt: 3);
        Assert.Throws<BadInputException>(() => Run(measurement, sink));
        Assert.Equal(3, sink.Frames.Count);
    }

    private static MeasurementFacts Run(OpenedMeasurement measurement, IMeasurementSink sink, IProgress<StageProgress>? progress = null) =>
        Ingestion.Run(measurement, sink, progress, TestContext.Current.CancellationToken);

    private static string Refused(ushort[][] frames, int darkFrames)
    {
        var sink = new RecordingSink();
        BadInputException bad = Assert.Throws<BadInputException>(() => Run(Measurement(frames, darkFrames), sink));
        Assert.Null(sink.Facts);
        return bad.Message;
    }

    private static OpenedMeasurement Measurement(ushort[][] frames, int darkFrames, int failAt = -1)
    {
        int modes = (frames.Length - darkFrames) / 3;
        var manifest = new MeasurementManifest(
            null, null, new CameraDescription(Size, Bits, null, null, null), new FrameLocation(FrameStorageKind.Raw, ["memory"], null, RawPixelFormat.UInt16LittleEndian, 0),
            new ScheduleLocation("s.csv", null, 0), new ModeDescription(BasisKind.Pixel, HadamardOrdering.Natural, modes, new GridShape(1, modes), null, null),
            null, SteppedArm.Signal, null, null);
        ImmutableArray<ScheduledFrame> rows = [.. Enumerable.Range(0, frames.Length).Select(i => i < darkFrames
            ? new ScheduledFrame(i, FrameRole.Dark, -1, -1, double.NaN, i)
            : new ScheduledFrame(i, FrameRole.Mode, (i - darkFrames) / 3, (i - darkFrames) % 3, (i - darkFrames) % 3 * 2.0, i))];
        return new OpenedMeasurement("m.json", manifest, new Schedule(rows, false), new MemorySource(frames, failAt), "memory", [], null, []);
    }

    /// <summary>CRC-32 bit by bit, from the definition.</summary>
    private static uint BitwiseCrc32(ReadOnlySpan<byte> bytes)
    {
        uint crc = 0xFFFFFFFF;
        foreach (byte b in bytes)
        {
            crc ^= b;
            for (int bit = 0; bit < 8; bit++)
            {
                crc = (crc >> 1) ^ ((crc & 1) == 1 ? 0xEDB88320u : 0);
            }
        }

        return ~crc;
    }

    private sealed class Recorder(List<StageProgress> reports) : IProgress<StageProgress>
    {
        public void Report(StageProgress value) => reports.Add(value);
    }

    private sealed class RecordingSink(Action<int>? written = null) : IMeasurementSink
    {
        public List<ushort[]> Frames { get; } = [];

        public MeasurementFacts? Facts { get; private set; }

        public void WriteFrame(int index, ReadOnlySpan<ushort> counts)
        {
            Assert.Equal(Frames.Count, index);
            Frames.Add(counts.ToArray());
            written?.Invoke(index);
        }

        public void Complete(MeasurementFacts facts) => Facts = facts;
    }

    private sealed class MemorySource(ushort[][] frames, int failAt) : IFrameSource
    {
        private int _next;

        public int FrameCount => frames.Length;

        public ImageSize FrameSize => Size;

        public (string File, string Place) NextFrame => ("memory", $"frame {_next}");

        public void ReadNext(Span<ushort> destination)
        {
            if (_next == failAt)
            {
                throw new BadInputException("memory", $"frame {_next}", "damaged", "copy it again");
            }

            frames[_next++].CopyTo(destination);
        }

        public void Dispose()
        {
            // Nothing is held.
        }
    }
}
