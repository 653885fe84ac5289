using System.Numerics;
using TmLab.Measurement;
using TmLab.Quantities;
using Xunit;

namespace TmLab.Tests.Measurement;

public sealed class ModeChecksTests
{
    [Theory]
    [InlineData(BasisKind.Hadamard, 256, 16, 16, null)]
    [InlineData(BasisKind.Fourier, 12, 3, 4, null)]
    [InlineData(BasisKind.Custom, 13, 3, 4, null)]
    [InlineData(BasisKind.Custom, 12, 3, 4, null)]
    [InlineData(BasisKind.Hadamard, 12, 3, 4, "12 is not a power of two")]
    [InlineData(BasisKind.HadamardBinary, 100, 10, 10, "100 is not a power of two")]
    [InlineData(BasisKind.Hadamard, 256, 16, 8, "the 16 × 8 grid holds 128 macro-pixels, but modes.count is 256")]
    [InlineData(BasisKind.Pixel, 5, 2, 2, "the 2 × 2 grid holds 4 macro-pixels, but modes.count is 5")]
    [InlineData(BasisKind.Custom, 11, 3, 4, "11 patterns are fewer than the 12 macro-pixels")]
    public void The_count_must_suit_basis_and_grid(BasisKind basis, int count, int rows, int columns, string? complaint)
    {
        var modes = new ModeDescription(basis, HadamardOrdering.Natural, count, new GridShape(rows, columns), null, null);
        var problems = ModeChecks.Check(modes, "m.json");
        if (complaint is null)
        {
            Assert.Empty(problems);
        }
        else
        {
            Assert.StartsWith(complaint, Assert.Single(problems).Found, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void A_wrong_count_names_the_powers_of_two_around_it()
    {
        var modes = new ModeDescription(BasisKind.Hadamard, HadamardOrdering.Natural, 100, new GridShape(10, 10), null, null);
        Assert.Contains("use 64 or 128", ModeChecks.Check(modes, "m.json")[0].Remedy, StringComparison.Ordinal);
    }

    [Fact]
    public void Elements_that_are_no_numbers_are_named_with_pattern_and_mode()
    {
        var patterns = new Complex[6];
        patterns[4] = new Complex(double.NaN, 0);
        patterns[5] = new Complex(0, double.NegativeInfinity);
        Assert.Equal(["pattern 1, mode 1", "pattern 1, mode 2"], ModeChecks.CheckPatterns(patterns, 3, "b.npy").Select(p => p.Place));
    }
}
