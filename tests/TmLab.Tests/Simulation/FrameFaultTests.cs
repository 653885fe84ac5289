using TmLab.Measurement;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

public sealed class FrameFaultTests
{
    [Theory]
    [InlineData(FrameFaultKind.Dropped, new[] { 0, 1, 3, 4, 5, 5 })]
    [InlineData(FrameFaultKind.Duplicated, new[] { 0, 1, 2, 2, 3, 4 })]
    [InlineData(FrameFaultKind.Stale, new[] { 0, 1, 1, 3, 4, 5 })]
    [InlineData(FrameFaultKind.Swapped, new[] { 0, 1, 3, 2, 4, 5 })]
    [InlineData(FrameFaultKind.Shaken, new[] { 0, 1, 2, 3, 4, 5 })]
    public void Frames_arrive_in_the_order_that_the_fault_leaves(FrameFaultKind kind, int[] expected) =>
        Assert.Equal(expected, FrameFault.Deliver(6, [new FrameFault(kind, 2)]));

    [Fact]
    public void Faults_follow_each_other() =>
        Assert.Equal([0, 2, 3, 3, 5, 5], FrameFault.Deliver(6, [new FrameFault(FrameFaultKind.Dropped, 1), new FrameFault(FrameFaultKind.Stale, 4)]));

    [Fact]
    public void Delivered_frames_are_the_bytes_of_the_frames_they_stand_for()
    {
        Schedule schedule = Benches.Schedule(16);
        MeasurementManifest manifest = Benches.Manifest(8, 4);
        using VirtualBench clean = Benches.Create(new BenchSettings(), manifest, schedule);
        using VirtualBench faulty = Benches.Create(
            new BenchSettings { Faults = [new FrameFault(FrameFaultKind.Dropped, 20), new FrameFault(FrameFaultKind.Swapped, 40)] },
            manifest, schedule);
        for (int place = 0; place < faulty.FrameCount; place++)
        {
            Assert.Equal(Benches.Frame(clean, faulty.Truth.SourceFrame[place]), Benches.Frame(faulty, place));
        }

        Assert.NotEqual(Benches.Frame(clean, 20), Benches.Frame(faulty, 20));
    }

    [Fact]
    public void A_shaken_frame_has_both_arms_and_no_fringes()
    {
        Schedule schedule = Benches.Schedule(16);
        MeasurementManifest manifest = Benches.Manifest(8, 4);
        int place = schedule.Frames.First(f => f.Role == FrameRole.Mode).Index;
        using VirtualBench shaken = Benches.Create(
            new BenchSettings { Faults = [new FrameFault(FrameFaultKind.Shaken, place)] }, manifest, schedule);
        using VirtualBench clean = Benches.Create(new BenchSettings(), manifest, schedule);
        float[] mean = Benches.Light(clean, place);
        for (int step = 1; step < 4; step++)
        {
            mean = [.. mean.Zip(Benches.Light(clean, place + step), (a, b) => a + b)];
        }

        Assert.All(mean.Zip(Benches.Light(shaken, place)), pair => Assert.Equal(pair.First / 4, pair.Second, 1e-5f * pair.First));
    }

    [Fact]
    public void A_fault_without_a_neighbour_is_refused()
    {
        Assert.ThrowsAny<ArgumentException>(() => FrameFault.Deliver(6, [new FrameFault(FrameFaultKind.Stale, 0)]));
        Assert.ThrowsAny<ArgumentException>(() => FrameFault.Deliver(6, [new FrameFault(FrameFaultKind.Swapped, 5)]));
        Assert.ThrowsAny<ArgumentException>(() => FrameFault.Deliver(
            6, [new FrameFault(FrameFaultKind.Dropped, 3), new FrameFault(FrameFaultKind.Swapped, 3)]));
    }
}
