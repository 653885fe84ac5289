using System.Runtime.InteropServices;

namespace TmLab.Storage.AtomicFiles;

/// <summary>Makes a rename survive a power cut: on Unix the folder's own entry is flushed too. Windows needs and offers nothing here.</summary>
internal static partial class FolderSync
{
    private const int ReadOnly = 0;

    /// <summary>Flushes the folder that holds <paramref name="file"/>. Folders that cannot be flushed (some network disks) are left alone.</summary>
    public static void FlushFolderOf(string file)
    {
        if (OperatingSystem.IsWindows())
        {
            return;
        }

        int descriptor = Open(Path.GetDirectoryName(Path.GetFullPath(file)) ?? "/", ReadOnly);
        if (descriptor >= 0)
        {
            _ = Fsync(descriptor);
            _ = Close(descriptor);
        }
    }

    [LibraryImport("libc", EntryPoint = "open", StringMarshalling = StringMarshalling.Utf8)]
    [DefaultDllImportSearchPaths(DllImportSearchPath.SafeDirectories)]
    private static partial int Open(string path, int flags);

    [LibraryImport("libc", EntryPoint = "fsync")]
    [DefaultDllImportSearchPaths(DllImportSearchPath.SafeDirectories)]
    private static partial int Fsync(int descriptor);

    [LibraryImport("libc", EntryPoint = "close")]
    [DefaultDllImportSearchPaths(DllImportSearchPath.SafeDirectories)]
    private static partial int Close(int descriptor);
}
