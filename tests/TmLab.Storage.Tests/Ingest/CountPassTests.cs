using TmLab.Storage.Ingest;
using Xunit;

namespace TmLab.Storage.Tests.Ingest;

public sealed class CountPassTests
{
    [Fact]
    public void Vectors_give_what_one_count_at_a_time_gives_at_every_length()
    {
        var random = new Random(7);
        for (int length = 0; length <= 256; length++)
        {
            ushort[] counts = [.. Enumerable.Range(0, length).Select(_ => (ushort)random.Next(4090, 4096))];
            Assert.Equal(CountPass.OverScalar(counts, 4095), CountPass.Over(counts, 4095));
        }
    }

    [Fact]
    public void Sums_and_counters_do_not_overflow_on_a_large_saturated_frame()
    {
        var counts = new ushort[(1 << 22) + 3];
        counts.AsSpan().Fill(ushort.MaxValue);
        CountPass pass = CountPass.Over(counts, ushort.MaxValue);
        Assert.Equal((ulong)counts.Length * 65535, pass.Sum);
        Assert.Equal(counts.Length, pass.Saturated);
        Assert.Equal(65535, pass.Largest);
    }
}
