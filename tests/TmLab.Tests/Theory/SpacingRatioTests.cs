using TmLab.Theory;
using Xunit;

namespace TmLab.Tests.Theory;

public sealed class SpacingRatioTests
{
    [Fact]
    public void Equal_spacings_have_ratio_1_whatever_their_order()
    {
        Assert.Equal(1, SpacingRatios.Mean([.. Enumerable.Range(0, 40).Select(k => 3.0 * k)]), 1e-12);
        Assert.Equal(1, SpacingRatios.Mean([5, 1, 3]), 1e-12);
    }

    [Fact]
    public void Ratios_are_of_the_smaller_over_the_larger()
    {
        // Spacings 1, 2, 1.
        Assert.Equal(0.5, SpacingRatios.Mean([0, 1, 3, 4]), 1e-12);
        Assert.Equal(0, SpacingRatios.Mean([0, 0, 0]));
    }

    [Fact]
    public void Too_few_levels_are_refused() => Assert.Throws<ArgumentException>(() => SpacingRatios.Mean([1, 2]));
}
