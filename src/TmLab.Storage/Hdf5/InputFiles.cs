using Microsoft.Win32.SafeHandles;
using TmLab.Failures;

namespace TmLab.Storage.Hdf5;

/// <summary>Opening of files for reading, with failures that say what is wrong.</summary>
internal static class InputFiles
{
    /// <summary>Opens a file for reading at any place from several threads; other programs may read it at the same time.</summary>
    /// <exception cref="BadInputException">There is no such file, or it may not be read.</exception>
    public static SafeFileHandle Open(string path)
    {
        if (Directory.Exists(path))
        {
            throw new BadInputException(path, null, "is a folder", "name a file");
        }

        try
        {
            return File.OpenHandle(path, FileMode.Open, FileAccess.Read, FileShare.Read | FileShare.Delete);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            throw new BadInputException(path, null, "does not exist", "check the name", e);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or NotSupportedException or ArgumentException)
        {
            throw new BadInputException(path, null, $"cannot be opened ({e.Message.TrimEnd('.')})", "check the name and the permissions", e);
        }
    }
}
