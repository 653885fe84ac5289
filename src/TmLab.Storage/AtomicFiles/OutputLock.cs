using Microsoft.Win32.SafeHandles;
using TmLab.Failures;

namespace TmLab.Storage.AtomicFiles;

/// <summary>
/// Holds the right to write one output: an exclusive lock on a small file beside it, which the operating system releases when the
/// process ends, however it ends. The file is deleted on release; one left by a killed process is taken over.
/// </summary>
internal sealed class OutputLock : IDisposable
{
    private const int Attempts = 100;
    private readonly SafeFileHandle _handle;
    private readonly string _lockPath;

    private OutputLock(SafeFileHandle handle, string lockPath)
    {
        _handle = handle;
        _lockPath = lockPath;
    }

    /// <summary>Takes the lock.</summary>
    /// <exception cref="OutputException">Another writer holds it, or the folder cannot be written to.</exception>
    public static OutputLock Take(string finalPath)
    {
        string lockPath = finalPath + AtomicOutput.LockSuffix;
        for (int attempt = 0; attempt < Attempts; attempt++)
        {
            SafeFileHandle handle = OutputFailures.Guard(
                finalPath, () => File.OpenHandle(lockPath, FileMode.OpenOrCreate, FileAccess.ReadWrite, FileShare.None));
            if (StillStandsAt(handle, lockPath))
            {
                return new OutputLock(handle, lockPath);
            }

            handle.Dispose();
        }

        throw new OutputException(finalPath, OutputFailure.Busy, "wait for the other process or choose another name");
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        if (_handle.IsClosed)
        {
            return;
        }

        // Where the system allows it the file goes while the lock is held: a process that opened it meanwhile then finds that the
        // name no longer leads to what it locked, and starts over.
        if (!OperatingSystem.IsWindows())
        {
            DeleteQuietly(_lockPath);
        }

        _handle.Dispose();
        if (OperatingSystem.IsWindows())
        {
            DeleteQuietly(_lockPath);
        }
    }

    // Between opening and locking, the previous holder may have deleted the file. A random length, set through the handle, is
    // looked for under the name.
    private static bool StillStandsAt(SafeFileHandle handle, string lockPath)
    {
        long token = Random.Shared.NextInt64(1, 1 << 20);
        RandomAccess.SetLength(handle, token);
        var file = new FileInfo(lockPath);
        return file.Exists && file.Length == token;
    }

    private static void DeleteQuietly(string path)
    {
        try
        {
            File.Delete(path);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // A lock file that stays is taken over by the next writer.
        }
    }
}
