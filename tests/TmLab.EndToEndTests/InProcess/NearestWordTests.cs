using TmLab.Cli.Help;
using Xunit;

namespace TmLab.EndToEndTests.InProcess;

public sealed class NearestWordTests
{
    // Damerau, Commun. ACM 7, 171 (1964): one insertion, deletion, substitution or swap of neighbours is one step.
    [Theory]
    [InlineData("ingest", "ingest", 0)]
    [InlineData("ingset", "ingest", 1)]
    [InlineData("kitten", "sitting", 3)]
    [InlineData("", "abc", 3)]
    public void Distances_are_counted_in_steps(string a, string b, int distance) => Assert.Equal(distance, NearestWord.EditDistance(a, b));

    [Fact]
    public void A_word_that_is_near_to_none_has_no_suggestion() => Assert.Null(NearestWord.Find("xyz", ["ingest", "mask"]));
}
