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
    public void A_frame_outside_the_counts_is_refused()
    {
        var counts = new ushort[64];
        var sums = new float[32];
        Assert.Throws<ArgumentOutOfRangeException>(
            () => WeightedFrameSum.Run(counts, 32, [2], [new Complex64(1, 0)], sums, new float[32]));
    }
}
