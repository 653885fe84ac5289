using System.Numerics;
using System.Runtime.InteropServices;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Native;

/// <summary>
/// The Fortran entry points of BLAS and LAPACK that the program calls: every argument by address, matrices column-major, and
/// behind the visible arguments one hidden length for each character argument (the ABI of gfortran and of flang; libraries built
/// without them ignore the extra arguments). 32-bit integers (LP64).
/// </summary>
internal sealed unsafe class LapackFunctions
{
    // Reference and OpenBLAS names end in an underscore; Accelerate's current LAPACK in $NEWLAPACK; Windows MKL has bare names too.
    private static readonly string[] s_suffixes = ["_", "$NEWLAPACK", ""];

    private readonly nint _handle;

    private LapackFunctions(nint handle, string library)
    {
        _handle = handle;
        Library = library;
    }

    /// <summary>The name by which the library was loaded.</summary>
    public string Library { get; }

    /// <summary>C = α A A† + β C or α A† A + β C, one triangle, single precision.</summary>
    public delegate* unmanaged<byte*, byte*, int*, int*, float*, Complex64*, int*, float*, Complex64*, int*, nuint, nuint, void> Cherk { get; private set; }

    /// <summary>As <see cref="Cherk"/> in double precision.</summary>
    public delegate* unmanaged<byte*, byte*, int*, int*, double*, Complex*, int*, double*, Complex*, int*, nuint, nuint, void> Zherk { get; private set; }

    /// <summary>C = α op(A) op(B) + β C, single precision.</summary>
    public delegate* unmanaged<byte*, byte*, int*, int*, int*, Complex64*, Complex64*, int*, Complex64*, int*, Complex64*, Complex64*, int*, nuint, nuint, void> Cgemm { get; private set; }

    /// <summary>Hermitian eigenproblem, all pairs (divide and conquer).</summary>
    public delegate* unmanaged<byte*, byte*, int*, Complex*, int*, double*, Complex*, int*, double*, int*, int*, int*, int*, nuint, nuint, void> Zheevd { get; private set; }

    /// <summary>Hermitian eigenproblem, some pairs (relatively robust representations).</summary>
    public delegate* unmanaged<byte*, byte*, byte*, int*, Complex*, int*, double*, double*, int*, int*, double*, int*, double*, Complex*, int*, int*, Complex*, int*, double*, int*, int*, int*, int*, nuint, nuint, nuint, void> Zheevr { get; private set; }

    /// <summary>Singular-value decomposition (divide and conquer).</summary>
    public delegate* unmanaged<byte*, int*, int*, Complex*, int*, double*, Complex*, int*, Complex*, int*, Complex*, int*, double*, int*, int*, nuint, void> Zgesdd { get; private set; }

    /// <summary>Singular-value decomposition (implicit QR).</summary>
    public delegate* unmanaged<byte*, byte*, int*, int*, Complex*, int*, double*, Complex*, int*, Complex*, int*, Complex*, int*, double*, int*, nuint, nuint, void> Zgesvd { get; private set; }

    /// <summary>LQ factorisation.</summary>
    public delegate* unmanaged<int*, int*, Complex*, int*, Complex*, Complex*, int*, int*, void> Zgelqf { get; private set; }

    /// <summary>Finds every function; null, and the name that is missing, when one is not there.</summary>
    public static LapackFunctions? Bind(nint handle, string library, out string? missing)
    {
        var functions = new LapackFunctions(handle, library);
        string? absent = null;
        nint Find(string name)
        {
            nint address = functions.Find(name);
            absent ??= address == 0 ? name : null;
            return address;
        }

        functions.Cherk = (delegate* unmanaged<byte*, byte*, int*, int*, float*, Complex64*, int*, float*, Complex64*, int*, nuint, nuint, void>)Find("cherk");
        functions.Zherk = (delegate* unmanaged<byte*, byte*, int*, int*, double*, Complex*, int*, double*, Complex*, int*, nuint, nuint, void>)Find("zherk");
        functions.Cgemm = (delegate* unmanaged<byte*, byte*, int*, int*, int*, Complex64*, Complex64*, int*, Complex64*, int*, Complex64*, Complex64*, int*, nuint, nuint, void>)Find("cgemm");
        functions.Zheevd = (delegate* unmanaged<byte*, byte*, int*, Complex*, int*, double*, Complex*, int*, double*, int*, int*, int*, int*, nuint, nuint, void>)Find("zheevd");
        functions.Zheevr = (delegate* unmanaged<byte*, byte*, byte*, int*, Complex*, int*, double*, double*, int*, int*, double*, int*, double*, Complex*, int*, int*, Complex*, int*, double*, int*, int*, int*, int*, nuint, nuint, nuint, void>)Find("zheevr");
        functions.Zgesdd = (delegate* unmanaged<byte*, int*, int*, Complex*, int*, double*, Complex*, int*, Complex*, int*, Complex*, int*, double*, int*, int*, nuint, void>)Find("zgesdd");
        functions.Zgesvd = (delegate* unmanaged<byte*, byte*, int*, int*, Complex*, int*, double*, Complex*, int*, Complex*, int*, Complex*, int*, double*, int*, nuint, nuint, void>)Find("zgesvd");
        functions.Zgelqf = (delegate* unmanaged<int*, int*, Complex*, int*, Complex*, Complex*, int*, int*, void>)Find("zgelqf");
        missing = absent;
        return absent is null ? functions : null;
    }

    /// <summary>What the library says of itself; null when it has no function for that.</summary>
    public string? Version()
    {
        if (NativeLibrary.TryGetExport(_handle, "openblas_get_config", out nint config))
        {
            return Marshal.PtrToStringUTF8((nint)((delegate* unmanaged<byte*>)config)())?.Trim();
        }

        return NativeLibrary.TryGetExport(_handle, "MKL_Get_Version_String", out nint version) ? MklVersion(version) : null;
    }

    /// <summary>How many threads the library uses; null when it does not tell.</summary>
    public int? Threads()
    {
        foreach (string name in (string[])["openblas_get_num_threads", "MKL_Get_Max_Threads"])
        {
            if (NativeLibrary.TryGetExport(_handle, name, out nint address))
            {
                return ((delegate* unmanaged<int>)address)();
            }
        }

        return null;
    }

    private static string? MklVersion(nint address)
    {
        const int length = 198;
        byte* text = stackalloc byte[length];
        ((delegate* unmanaged<byte*, int, void>)address)(text, length - 1);
        text[length - 1] = 0;
        return Marshal.PtrToStringUTF8((nint)text)?.Trim();
    }

    private nint Find(string name)
    {
        foreach (string suffix in s_suffixes)
        {
            if (NativeLibrary.TryGetExport(_handle, name + suffix, out nint address))
            {
                return address;
            }
        }

        return 0;
    }
}
