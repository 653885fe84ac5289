using TmLab.Numerics.LinearAlgebra;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

public sealed class EngineChoiceTests
{
    [Fact]
    public void The_managed_engine_is_always_there()
    {
        EngineSelection selection = LinearAlgebraEngines.Choose(EngineChoice.Managed);
        Assert.Equal("managed", selection.Engine!.Name);
        Assert.Null(selection.Explanation);
    }

    [Fact]
    public void A_broken_library_falls_back_with_one_line()
    {
        string file = Path.GetTempFileName();
        try
        {
            File.WriteAllText(file, "This is not a library.");
            EngineSelection selection = LinearAlgebraEngines.Choose(EngineChoice.Auto, file);
            Assert.Equal("managed", selection.Engine!.Name);
            Assert.Contains(file, selection.Explanation!, StringComparison.Ordinal);
            Assert.DoesNotContain('\n', selection.Explanation!);
        }
        finally
        {
            File.Delete(file);
        }
    }

    [Fact]
    public void A_demanded_library_that_is_not_there_is_an_outcome_without_an_engine()
    {
        EngineSelection selection = LinearAlgebraEngines.Choose(EngineChoice.Native, "no-such-library.so");
        Assert.False(selection.Succeeded);
        Assert.Contains("no-such-library.so does not load", selection.Explanation!, StringComparison.Ordinal);
    }

    [Fact]
    public void A_library_without_LAPACK_is_refused_by_the_name_of_what_it_lacks()
    {
        Assert.SkipUnless(OperatingSystem.IsLinux(), "names a library of Linux");
        EngineSelection selection = LinearAlgebraEngines.Choose(EngineChoice.Auto, "libm.so.6");
        Assert.Equal("managed", selection.Engine!.Name);
        Assert.Contains("has no function cherk", selection.Explanation!, StringComparison.Ordinal);
    }

    [Fact]
    public void The_native_engine_tells_library_and_threads()
    {
        ILinearAlgebraEngine engine = Engines.Get(EngineChoice.Native);
        Assert.Equal("native", engine.Name);
        Assert.True(engine.Threads >= 1);
        Assert.Contains($"{engine.Threads} threads", engine.Description, StringComparison.Ordinal);
    }
}
