using Xunit;

namespace TmLab.OutsideTests;

public sealed class SmokeTests
{
    [Fact]
    public void The_project_runs() => Assert.True(true);
}
