using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.Kernels;

public sealed class WeightedFrameSumTests
{
    [Fact]
    public void The_vector_form_equals_the_scalar_form_to_the_last_bit_at_every_width_and_number_of_frames()
    {
        var random = new Random(1);
        for (int pixels = 0; pixels <= 256; pixels += ModePlanes.LaneMultiple)
        {
            foreach (int frames in new[] { 0, 1, 3, 4, 5, 17 })
            {
                int stride = pixels + 5;
                using var counts = new GuardedMemory<ushort>(Math.Max(0, ((frames - 1) * stride) + pixels));
                foreach (ref ushort count in counts.Span)
                {
                    count = (ushort)random.Next(65536);
                }

                int[] order = [.. Enumerable.Range(0, frames).Reverse()];
                Complex64[] weights = [.. order.Select(_ => new Complex64(random.NextSingle() - 0.5f, random.NextSingle() - 0.5f))];
                using GuardedMemory<float> re = new(pixels), im = new(pixels), re2 = new(pixels), im2 = new(pixels);
                WeightedFrameSum.Run(counts.Span, stride, order, weights, re.Span, im.Span);
                WeightedFrameSum.RunScalar(counts.Span, stride, order, weights, re2.Span, im2.Span);
                Assert.Equal(re2.Span.ToArray(), re.Span.ToArray());
                Assert.Equal(im2.Span.ToArray(), im.Span.ToArray());
            }
        }
    }

    [Fact]
    public void All_patterns_at_once_give_each_patterns_sum_in_its_row()
    {
        var random = new Random(2);
        int lanes = 3 * ModePlanes.LaneMultiple, stride = lanes + 7;
        using var counts = new GuardedMemory<ushort>((8 * stride) + lanes);
        foreach (ref ushort count in counts.Span)
        {
            count = (ushort)random.Next(65536);
        }

        PatternWeights[] patterns = [.. new[] { 2, 0, 1 }.Select(row => new PatternWeights(
            row,
            [.. Enumerable.Range(0, 3 + row).Select(s => (row + (2 * s)) % 9)],
            [.. Enumerable.Range(0, 3 + row).Select(_ => new Complex64(random.NextSingle(), random.NextSingle()))]))];
        using GuardedMemory<float> re = new(3 * lanes), im = new(3 * lanes), expectedRe = new(lanes), expectedIm = new(lanes);
        var planes = new ModePlanes(3, lanes, re.Span, im.Span, re.Span, im.Span);
        WeightedFrameSum.RunAll(counts.Span, stride, new FrameWeights(patterns), planes);
        foreach (PatternWeights pattern in patterns)
        {
            WeightedFrameSum.RunScalar(
                counts.Span, stride, pattern.Frames.AsSpan(), pattern.Weights.AsSpan(), expectedRe.Span, expectedIm.Span);
            Assert.True(expectedRe.Span.SequenceEqual(planes.RealRow(pattern.PlaneRow)));
            Assert.True(expectedIm.Span.SequenceEqual(planes.ImaginaryRow(pattern.PlaneRow)));
        }
    }

    [Fact]
    public void A_frame_outside_the_counts_is_refused()
    {
        var counts = new ushort[64];
        var sums = new float[32];
        Assert.Throws<ArgumentOutOfRangeException>(
            () => WeightedFrameSum.Run(counts, 32, [2], [new Complex64(1, 0)], sums, new float[32]));
    }
}
