using System.Runtime.InteropServices;

namespace TmLab.Numerics.Matrices;

/// <summary>
/// Asks the system to back large buffers by large pages (Linux, madvise). Kernels walk over tiles of thousands of frames with
/// strides of kilobytes; with 4-KiB pages most of their time would go into address translation. Advice only: elsewhere nothing happens.
/// </summary>
internal static unsafe partial class LargePages
{
    /// <summary>Size and alignment of a large page.</summary>
    public const nuint PageBytes = 2 << 20;

    /// <summary>Smaller buffers are left alone.</summary>
    public const nuint WorthwhileBytes = 2 * PageBytes;

    private const int HugePageAdvice = 14;

    /// <summary>Advises for a buffer aligned to <see cref="PageBytes"/>; small ones are left alone.</summary>
    public static void Advise(void* address, nuint bytes)
    {
        if (OperatingSystem.IsLinux() && bytes >= WorthwhileBytes)
        {
            // A kernel without large pages says no, and ordinary ones serve.
            _ = Madvise(address, bytes / PageBytes * PageBytes, HugePageAdvice);
        }
    }

    [LibraryImport("libc", EntryPoint = "madvise")]
    private static partial int Madvise(void* address, nuint length, int advice);
}
