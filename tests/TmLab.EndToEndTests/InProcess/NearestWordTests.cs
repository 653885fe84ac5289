using TmLab.Cli.Help;
using Xunit;

namespace TmLab.EndToEndTests.InProcess;

public sealed class NearestWordTests
{
    [Theory]
    [InlineData("ingset", "ingest")]
    [InlineData("mak", "mask")]
    [InlineData("ingest", "ingest")]
    public void A_near_word_is_suggested(string typed, string meant) => Assert.Equal(meant, NearestWord.Find(typed, ["ingest", "mask"]));

    [Fact]
    public void A_word_that_is_near_to_none_has_no_suggestion() => Assert.Null(NearestWord.Find("xyz", ["ingest", "mask"]));
}
