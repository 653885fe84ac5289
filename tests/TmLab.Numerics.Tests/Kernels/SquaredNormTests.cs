using TmLab.Numerics.Kernels;
using Xunit;

namespace TmLab.Numerics.Tests.Kernels;

public sealed class SquaredNormTests
{
    [Fact]
    public void It_is_the_sum_of_squares_within_its_stated_error_at_every_length()
    {
        var random = new Random(3);
        foreach (int length in Enumerable.Range(0, 300).Append(4096).Append(100_001))
        {
            float[] values = [.. Enumerable.Range(0, length).Select(_ => random.NextSingle() - 0.5f)];
            double exact = values.Sum(v => (double)v * v);
            Assert.InRange(SquaredNorm.Of(values), exact * (1 - Math.ScaleB(1, -19)), exact * (1 + Math.ScaleB(1, -19)));
        }
    }
}
