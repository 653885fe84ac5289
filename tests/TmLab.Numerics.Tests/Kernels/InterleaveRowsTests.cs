using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.Kernels;

public sealed class InterleaveRowsTests
{
    [Fact]
    public void The_vector_form_equals_the_scalar_form_at_every_number_of_pixels_and_modes()
    {
        var random = new Random(2);
        const int lanes = 48;
        foreach (int modes in Enumerable.Range(1, 20).Append(64))
        {
            for (int pixels = 0; pixels <= lanes; pixels++)
            {
                using GuardedMemory<float> re = Filled(modes * lanes, random), im = Filled(modes * lanes, random), scale = Filled(lanes, random);
                using GuardedMemory<Complex64> rows = new(pixels * modes), oracle = new(pixels * modes);
                var planes = new ModePlanes(modes, lanes, re.Span, im.Span, re.Span, im.Span);
                InterleaveRows.Run(planes, pixels, scale.Span, rows.Span);
                InterleaveRows.RunScalar(planes, pixels, scale.Span, oracle.Span);
                Assert.Equal(oracle.Span.ToArray(), rows.Span.ToArray());
            }
        }
    }

    private static GuardedMemory<float> Filled(int length, Random random)
    {
        var memory = new GuardedMemory<float>(length);
        foreach (ref float value in memory.Span)
        {
            value = random.NextSingle() - 0.5f;
        }

        return memory;
    }
}
