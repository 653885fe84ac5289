using System.Numerics;
using TmLab.Numerics.Transforms;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.Transforms;

public sealed class FourierPlanTests
{
    public static TheoryData<int> Lengths => [.. Enumerable.Range(1, 40).Concat([60, 64, 81, 97, 100, 128, 210, 256])];

    [Theory]
    [MemberData(nameof(Lengths))]
    public void It_is_the_sum_of_its_definition_for_both_signs(int length)
    {
        foreach (FourierSign sign in Enum.GetValues<FourierSign>())
        {
            Complex[] input = Draw(length, length);
            Complex[] output = Transform(input, sign);
            double s = sign == FourierSign.Negative ? -1 : 1;
            for (int k = 0; k < length; k++)
            {
                Complex exact = 0;
                for (int n = 0; n < length; n++)
                {
                    exact += input[n] * Complex.FromPolarCoordinates(1, s * 2 * Math.PI * ((long)k * n % length) / length);
                }

                // Numbers of magnitude ≤ 1/√2, N of them, a few roundings in each of at most log₂ N + r operations.
                Assert.True((exact - output[k]).Magnitude < 4 * length * Math.Max(4, Math.Log2(length)) * Math.ScaleB(1, -24));
            }
        }
    }

    [Fact]
    public void Forward_and_back_is_N_times_the_input()
    {
        Complex[] input = Draw(360, 7);
        Complex[] output = Transform(Transform(input, FourierSign.Negative), FourierSign.Positive);
        for (int n = 0; n < input.Length; n++)
        {
            Assert.True((output[n] - (360 * input[n])).Magnitude < 360 * 16 * Math.ScaleB(1, -24));
        }
    }

    // Sixteen equal lanes in guarded memory; lane 3 is returned after all lanes were seen to agree.
    private static Complex[] Transform(Complex[] input, FourierSign sign)
    {
        const int width = 16;
        using GuardedMemory<float> re = new(input.Length * width), im = new(input.Length * width);
        using GuardedMemory<float> sr = new(input.Length * width), si = new(input.Length * width);
        for (int i = 0; i < re.Span.Length; i++)
        {
            re.Span[i] = (float)input[i / width].Real;
            im.Span[i] = (float)input[i / width].Imaginary;
        }

        new FourierPlan(input.Length, sign).Transform(re.Span, im.Span, sr.Span, si.Span, width);
        Complex[] all = [.. re.Span.ToArray().Zip(im.Span.ToArray(), (a, b) => new Complex(a, b))];
        Assert.All(Enumerable.Range(0, all.Length), i => Assert.Equal(all[i / width * width], all[i]));
        return [.. Enumerable.Range(0, input.Length).Select(k => all[(k * width) + 3])];
    }

    private static Complex[] Draw(int length, int seed)
    {
        var random = new Random(seed);
        return [.. Enumerable.Range(0, length).Select(_ => new Complex(random.NextSingle() - 0.5f, random.NextSingle() - 0.5f))];
    }
}
