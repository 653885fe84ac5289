using System.Runtime.InteropServices;

namespace TmLab.Numerics.LinearAlgebra.Native;

/// <summary>Looks for a LAPACK library that loads, has every function and passes a small self-test.</summary>
/// <param name="Functions">The functions found, or null.</param>
/// <param name="Trouble">Why none was usable, one line; null when one is.</param>
internal sealed record NativeLibrarySearch(LapackFunctions? Functions, string? Trouble)
{
    /// <summary>Tries the library named, or where none is named the system's usual names in order.</summary>
    public static NativeLibrarySearch Run(string? libraryFile)
    {
        bool named = !string.IsNullOrEmpty(libraryFile);
        string? trouble = null;
        foreach (string candidate in named ? [libraryFile!] : UsualNames())
        {
            NativeLibrarySearch result = Try(candidate);
            if (result.Functions is not null)
            {
                return result;
            }

            // A library that loads but lacks something tells more than the names that are simply not there.
            trouble = result.Trouble ?? trouble;
        }

        return new NativeLibrarySearch(
            null, named ? trouble ?? $"{libraryFile} does not load" : trouble ?? $"none of {string.Join(", ", UsualNames())} was found");
    }

    private static NativeLibrarySearch Try(string candidate)
    {
        if (!NativeLibrary.TryLoad(candidate, out nint handle))
        {
            return new NativeLibrarySearch(null, null);
        }

        LapackFunctions? functions = LapackFunctions.Bind(handle, candidate, out string? missing);
        if (functions is null)
        {
            NativeLibrary.Free(handle);
            return new NativeLibrarySearch(null, $"{candidate} has no function {missing}");
        }

        // A library that has run once may have started threads: it is kept loaded even when it fails the test.
        return NativeSelfTest.Passes(functions)
            ? new NativeLibrarySearch(functions, null)
            : new NativeLibrarySearch(null, $"{candidate} gives wrong results in the self-test");
    }

    private static string[] UsualNames()
    {
        if (OperatingSystem.IsWindows())
        {
            return ["libopenblas.dll", "openblas.dll", "mkl_rt.2.dll", "mkl_rt.dll"];
        }

        if (OperatingSystem.IsMacOS())
        {
            return
            [
                "/System/Library/Frameworks/Accelerate.framework/Accelerate",
                "/opt/homebrew/opt/openblas/lib/libopenblas.dylib",
                "/usr/local/opt/openblas/lib/libopenblas.dylib",
            ];
        }

        return ["libopenblas.so.0", "libopenblas.so", "libmkl_rt.so.2", "libmkl_rt.so", "liblapack.so.3"];
    }
}
