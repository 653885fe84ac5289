using System.Numerics;
using CsCheck;
using TmLab.Numerics.Transforms;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.Transforms;

public sealed class WalshHadamardTests
{
    [Fact]
    public void The_vector_form_equals_the_scalar_form_to_the_last_bit_at_every_power_of_two()
    {
        var random = new Random(5);
        for (int rows = 1; rows <= 4096; rows *= 2)
        {
            foreach (int lanes in new[] { 16, 48 })
            {
                using GuardedMemory<float> fast = new(rows * lanes), slow = new(rows * lanes);
                foreach (ref float value in fast.Span)
                {
                    value = random.NextSingle() - 0.5f;
                }

                fast.Span.CopyTo(slow.Span);
                WalshHadamard.Transform(fast.Span, rows, lanes);
                WalshHadamard.TransformScalar(slow.Span, rows, lanes);
                Assert.True(fast.Span.SequenceEqual(slow.Span), $"{rows} rows of {lanes} lanes differ");
            }
        }
    }

    // Definition: Harwit & Sloane, Hadamard Transform Optics (1979): Sylvester's matrix, H[k, n] = (−1)^popcount(k & n).
    [Theory]
    [InlineData(1)]
    [InlineData(8)]
    [InlineData(64)]
    [InlineData(256)]
    public void It_is_the_dense_product_with_Sylvesters_matrix(int rows)
    {
        const int lanes = 16;
        var random = new Random(6);
        float[] input = [.. Enumerable.Range(0, rows * lanes).Select(_ => random.NextSingle() - 0.5f)];
        float[] output = [.. input];
        WalshHadamard.Transform(output, rows, lanes);
        for (int k = 0; k < rows; k++)
        {
            double exact = Enumerable.Range(0, rows).Sum(n => (BitOperations.PopCount((uint)(k & n)) % 2 == 0 ? 1.0 : -1.0) * input[n * lanes]);
            // log₂ N additions of numbers up to N/2, half an ulp each.
            Assert.Equal(exact, output[k * lanes], rows * Math.Max(1, Math.Log2(rows)) * Math.ScaleB(1, -25));
        }
    }

    [Fact]
    public void Applied_twice_it_is_N_times_the_input() =>
        Gen.Int[0, 10].Select(Gen.Int).Sample((bits, seed) =>
        {
            int rows = 1 << bits;
            var random = new Random(seed);
            float[] input = [.. Enumerable.Range(0, rows * 16).Select(_ => random.NextSingle() - 0.5f)];
            float[] output = [.. input];
            WalshHadamard.Transform(output, rows, 16);
            WalshHadamard.Transform(output, rows, 16);
            double tolerance = rows * Math.Max(1, 2 * bits) * Math.ScaleB(1, -24);
            Assert.All(Enumerable.Range(0, input.Length), i => Assert.Equal(rows * (double)input[i], output[i], tolerance));
        }, iter: 200);

    // Definition of sequency: the number of sign changes along the row (Harwit & Sloane 1979).
    [Fact]
    public void The_row_of_sequency_s_has_s_sign_changes()
    {
        for (int bits = 0; bits <= 8; bits++)
        {
            for (int s = 0; s < 1 << bits; s++)
            {
                int row = WalshHadamard.NaturalRowOfSequency(s, bits);
                int changes = Enumerable.Range(1, (1 << bits) - 1)
                    .Count(n => (BitOperations.PopCount((uint)(row & n)) + BitOperations.PopCount((uint)(row & (n - 1)))) % 2 == 1);
                Assert.Equal(s, changes);
            }
        }
    }

    [Fact]
    public void A_number_of_rows_that_is_no_power_of_two_is_refused() =>
        Assert.Throws<ArgumentException>(() => WalshHadamard.Transform(new float[48], 3, 16));
}
