using CsCheck;
using TmLab.Measurement;
using Xunit;

namespace TmLab.Tests.Measurement;

public sealed class NearestNameTests
{
    /// <summary>"kitten" and "sitting" are the textbook example (Wagner and Fischer 1974 give the algorithm): distance 3.</summary>
    [Theory]
    [InlineData("kitten", "sitting", 3)]
    [InlineData("", "abc", 3)]
    [InlineData("same", "SAME", 0)]
    [InlineData("ab", "ba", 2)]
    public void Edit_distances_are_the_known_ones(string first, string second, int distance) =>
        Assert.Equal(distance, NearestName.EditDistance(first, second));

    [Fact]
    public void Edit_distance_is_a_metric() =>
        Gen.Select(Gen.Char['a', 'c'].Array[0, 6], Gen.Char['a', 'c'].Array[0, 6], Gen.Char['a', 'c'].Array[0, 6]).Sample((a, b, c) =>
        {
            (string x, string y, string z) = (new string(a), new string(b), new string(c));
            int direct = NearestName.EditDistance(x, z);
            Assert.Equal(direct, NearestName.EditDistance(z, x));
            Assert.Equal(x == z, direct == 0);
            Assert.True(direct <= NearestName.EditDistance(x, y) + NearestName.EditDistance(y, z));
        });

    [Fact]
    public void The_nearest_name_is_found_and_none_among_none()
    {
        Assert.Equal("bit_depth", NearestName.Of("bitdepth", ["width", "height", "bit_depth"]));
        Assert.Equal("phase_rad", NearestName.Of("phase", ["frame", "mode", "phase_rad"]));
        Assert.Null(NearestName.Of("x", []));
    }
}
