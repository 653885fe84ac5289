using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Statistics;
using Xunit;

namespace TmLab.Numerics.Tests.Statistics;

/// <summary>Moments are checked at 4 standard errors; seeds are fixed, so that a test passes always or never.</summary>
public sealed class SeededRandomTests
{
    private const int Draws = 200_000;

    [Fact]
    public void Uniform_numbers_have_mean_a_half_and_variance_a_twelfth()
    {
        var random = new SeededRandom(1);
        double[] x = [.. Enumerable.Range(0, Draws).Select(_ => random.NextUniform())];
        Assert.All(x, u => Assert.InRange(u, 0, 1 - 1e-17));
        Assert.Equal(0.5, x.Average(), 4 * Math.Sqrt(1 / 12.0 / Draws));

        // var of (u − ½)² is 1/180.
        Assert.Equal(1 / 12.0, x.Average(u => (u - 0.5) * (u - 0.5)), 4 * Math.Sqrt(1 / 180.0 / Draws));
    }

    [Fact]
    public void Complex_normals_are_circular_and_of_unit_power()
    {
        var random = new SeededRandom(2);
        Complex[] z = [.. Enumerable.Range(0, Draws).Select(_ => random.NextComplexNormal())];
        double power = z.Average(v => v.Magnitude * v.Magnitude);
        Complex mean = z.Aggregate(Complex.Zero, (s, v) => s + v) / Draws, square = z.Aggregate(Complex.Zero, (s, v) => s + (v * v)) / Draws;
        Assert.Equal(1, power, 4 / Math.Sqrt(Draws));
        Assert.True(mean.Magnitude < 4 / Math.Sqrt(Draws));
        Assert.True(square.Magnitude < 4 * Math.Sqrt(2.0 / Draws));

        // ⟨|z|⁴⟩ = 2, variance of |z|⁴ = 4! − 4.
        Assert.Equal(2, z.Average(v => Math.Pow(v.Magnitude, 4)), 4 * Math.Sqrt(20.0 / Draws));
    }

    [Fact]
    public void Normals_have_unit_variance_and_kurtosis_3()
    {
        var random = new SeededRandom(3);
        double[] x = [.. Enumerable.Range(0, Draws).Select(_ => random.NextNormal())];
        Assert.Equal(0, x.Average(), 4 / Math.Sqrt(Draws));
        Assert.Equal(1, x.Average(v => v * v), 4 * Math.Sqrt(2.0 / Draws));
        Assert.Equal(3, x.Average(v => v * v * v * v), 4 * Math.Sqrt(96.0 / Draws));
    }

    [Fact]
    public void Integers_cover_their_range_evenly()
    {
        var random = new SeededRandom(4);
        int[] counts = new int[7];
        for (int k = 0; k < Draws; k++)
        {
            counts[random.NextInteger(7)]++;
        }

        Assert.All(counts, count => Assert.Equal(Draws / 7.0, count, 4 * Math.Sqrt(Draws * 6 / 49.0)));
        Assert.Equal(0, random.NextInteger(1));
        Assert.Throws<ArgumentOutOfRangeException>(() => random.NextInteger(0));
    }

    [Fact]
    public void Streams_and_seeds_are_reproducible_and_different()
    {
        static uint[] Take(ulong seed, ulong stream)
        {
            var random = new SeededRandom(seed, stream);
            return [.. Enumerable.Range(0, 9).Select(_ => random.NextBits())];
        }

        Assert.Equal(Take(5, 6), Take(5, 6));
        Assert.NotEqual(Take(5, 6), Take(5, 7));
        Assert.NotEqual(Take(5, 6), Take(6, 6));
        Assert.NotEqual(Take(5, 0), Take(5, 1UL << 40));
    }

    [Fact]
    public void Haar_columns_are_orthonormal_and_their_elements_have_the_known_moments()
    {
        const int size = 24, matrices = 60;
        double fourth = 0;
        for (int k = 0; k < matrices; k++)
        {
            using Complex128Matrix u = RandomMatrices.HaarUnitary(size, size, (ulong)k);
            fourth += Enumerable.Range(0, size).Sum(row => Enumerable.Range(0, size).Sum(column => Math.Pow(u[row, column].Magnitude, 4)));
            for (int column = 0; column < size; column++)
            {
                Complex inner = Enumerable.Range(0, size).Aggregate(Complex.Zero, (s, row) => s + (Complex.Conjugate(u[row, column]) * u[row, 0]));
                Assert.True((inner - (column == 0 ? 1 : 0)).Magnitude < 1e-14);
            }
        }

        // E|u|⁴ = 2/(n(n+1)); |u|² is nearly exponential, so one |u|⁴ deviates by √20/n²; columns count as independent, elements of one less so.
        double expected = 2.0 / (size * (size + 1));
        Assert.Equal(expected, fourth / (matrices * size * size), 4 * Math.Sqrt(20.0) / (size * size) / Math.Sqrt(matrices * size));
    }

    // Without the phase correction of a plain QR the diagonal would be positive more often than negative.
    [Fact]
    public void Haar_matrices_have_no_preferred_phase()
    {
        const int matrices = 4000;
        Complex sum = Complex.Zero;
        for (int k = 0; k < matrices; k++)
        {
            using Complex128Matrix u = RandomMatrices.HaarUnitary(3, 3, (ulong)(k + 1000));
            sum += u[0, 0] + u[1, 1] + u[2, 2];
        }

        // E|tr U|² = 1.
        Assert.True(sum.Magnitude / matrices < 4 / Math.Sqrt(matrices));
    }

    [Fact]
    public void Gaussian_matrices_do_not_depend_on_their_number_of_rows()
    {
        using ComplexMatrix small = RandomMatrices.Gaussian(3, 5, 8), large = RandomMatrices.Gaussian(30, 5, 8);
        Assert.True(small.Buffer.AsSpan().SequenceEqual(large.RowBlock(0, 3)));
    }
}
