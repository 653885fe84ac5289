using Xunit;

namespace TmLab.Numerics.Tests;

public sealed class SmokeTests
{
    [Fact]
    public void The_project_runs() => Assert.True(true);
}
