using Xunit;

namespace TmLab.RulesTests;

public sealed class SmokeTests
{
    [Fact]
    public void The_project_runs() => Assert.True(true);
}
