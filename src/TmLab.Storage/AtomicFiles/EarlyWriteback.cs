using System.Runtime.InteropServices;
using Microsoft.Win32.SafeHandles;

namespace TmLab.Storage.AtomicFiles;

/// <summary>
/// Asks the system to begin carrying written bytes to the disk (Linux, sync_file_range), so that the flush at the end finds most of
/// them there already and the disk works while the processor computes. Advice only: the flush is what counts.
/// </summary>
internal static partial class EarlyWriteback
{
    private const uint StartWrite = 2;

    /// <summary>Begins for a range of a file.</summary>
    public static void Begin(SafeFileHandle file, long offset, long length)
    {
        if (OperatingSystem.IsLinux())
        {
            _ = SyncFileRange(file, offset, length, StartWrite);
        }
    }

    [LibraryImport("libc", EntryPoint = "sync_file_range")]
    [DefaultDllImportSearchPaths(DllImportSearchPath.SafeDirectories)]
    private static partial int SyncFileRange(SafeFileHandle file, long offset, long length, uint flags);
}
