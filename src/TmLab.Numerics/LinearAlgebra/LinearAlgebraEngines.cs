using TmLab.Numerics.LinearAlgebra.Managed;
using TmLab.Numerics.LinearAlgebra.Native;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Finds an engine. A native library is loaded and tested at each call; keep the engine that was found.</summary>
public static class LinearAlgebraEngines
{
    /// <summary>The environment variable that names a LAPACK library file to try first.</summary>
    public const string LibraryVariable = "TMLAB_LAPACK";

    /// <summary>Chooses an engine; the library named by <see cref="LibraryVariable"/>, if any, comes first.</summary>
    public static EngineSelection Choose(EngineChoice choice) =>
        Choose(choice, Environment.GetEnvironmentVariable(LibraryVariable));

    /// <summary>Chooses an engine.</summary>
    /// <param name="choice">What is asked for.</param>
    /// <param name="libraryFile">
    /// A library to use in place of the system's: when it does not work, no other one is tried, so that nobody computes with
    /// another library than the one named. Null or empty: the usual names are tried in order.
    /// </param>
    public static EngineSelection Choose(EngineChoice choice, string? libraryFile)
    {
        if (choice == EngineChoice.Managed)
        {
            return new EngineSelection(new ManagedEngine(), null);
        }

        NativeLibrarySearch search = NativeLibrarySearch.Run(libraryFile);
        if (search.Functions is not null)
        {
            return new EngineSelection(new NativeEngine(search.Functions), null);
        }

        return choice == EngineChoice.Native
            ? new EngineSelection(null, $"no usable LAPACK library: {search.Trouble}")
            : new EngineSelection(new ManagedEngine(), $"using the managed engine, no usable LAPACK library: {search.Trouble}");
    }
}
