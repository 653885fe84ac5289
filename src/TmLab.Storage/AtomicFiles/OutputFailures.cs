using System.Reflection;
using TmLab.Failures;

namespace TmLab.Storage.AtomicFiles;

/// <summary>The one place where failures of the operating system while writing become <see cref="OutputException"/>s.</summary>
public static class OutputFailures
{
    private const int UnixNoSpace = 28;
    private const int UnixReadOnlyFileSystem = 30;
    private const int LinuxQuota = 122;
    private const int MacQuota = 69;
    private const int LinuxWouldBlock = 11;
    private const int MacWouldBlock = 35;
    private const int WindowsSharingViolation = unchecked((int)0x80070020);
    private const int WindowsHandleDiskFull = unchecked((int)0x80070027);
    private const int WindowsDiskFull = unchecked((int)0x80070070);

    /// <summary>Runs a step of writing <paramref name="finalPath"/>; failures of the file system come out typed.</summary>
    /// <exception cref="OutputException">The step failed.</exception>
    public static void Guard(string finalPath, Action step) => Guard(finalPath, () =>
    {
        step();
        return true;
    });

    /// <summary>Runs a step of writing <paramref name="finalPath"/>; failures of the file system come out typed.</summary>
    /// <exception cref="OutputException">The step failed.</exception>
    public static T Guard<T>(string finalPath, Func<T> step)
    {
        try
        {
            return step();
        }
        catch (Exception thrown) when (Find(thrown) is { } cause)
        {
            throw Translate(finalPath, cause);
        }
    }

    /// <summary>The exception for a failure of the file system.</summary>
    public static OutputException Translate(string finalPath, Exception cause) => cause switch
    {
        DirectoryNotFoundException =>
            new(finalPath, OutputFailure.NotWritable, "create its folder first", cause),
        UnauthorizedAccessException =>
            new(finalPath, OutputFailure.NotWritable, "choose a folder that you may write to", cause),
        IOException io when IsDiskFull(io) =>
            new(finalPath, OutputFailure.DiskFull, "free some space or choose another disk", cause),
        IOException io when IsSharingViolation(io) =>
            new(finalPath, OutputFailure.Busy, "wait for the other process or choose another name", cause),
        IOException { HResult: UnixReadOnlyFileSystem } =>
            new(finalPath, OutputFailure.NotWritable, "choose a folder on a disk that is not read-only", cause),
        _ => new(finalPath, OutputFailure.NotWritable, $"choose another folder or name ({cause.Message})", cause),
    };

    // The HDF5 library calls through reflection, so that the cause may be wrapped.
    private static Exception? Find(Exception thrown) => thrown switch
    {
        TargetInvocationException { InnerException: { } inner } => Find(inner),
        IOException or UnauthorizedAccessException => thrown,
        _ => null,
    };

    private static bool IsDiskFull(IOException failure) => OperatingSystem.IsWindows()
        ? failure.HResult is WindowsDiskFull or WindowsHandleDiskFull
        : failure.HResult is UnixNoSpace || failure.HResult == (OperatingSystem.IsMacOS() ? MacQuota : LinuxQuota);

    private static bool IsSharingViolation(IOException failure) => OperatingSystem.IsWindows()
        ? failure.HResult is WindowsSharingViolation
        : failure.HResult == (OperatingSystem.IsMacOS() ? MacWouldBlock : LinuxWouldBlock);
}
