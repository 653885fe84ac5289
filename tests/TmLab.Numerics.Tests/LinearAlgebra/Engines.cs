using TmLab.Numerics.LinearAlgebra;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

/// <summary>The engines that a test runs on. Where no LAPACK library is installed the native one skips; in CI that is a failure.</summary>
internal static class Engines
{
    public static ILinearAlgebraEngine Get(EngineChoice choice)
    {
        EngineSelection selection = LinearAlgebraEngines.Choose(choice);
        if (!selection.Succeeded)
        {
            Assert.False(Environment.GetEnvironmentVariable("CI") == "true", selection.Explanation);
            Assert.Skip(selection.Explanation!);
        }

        return selection.Engine!;
    }
}
