using TmLab.Failures;

namespace TmLab.Storage.Manifest;

/// <summary>Opens files that a user named; what goes wrong becomes bad input with the file's name.</summary>
internal static class InputFile
{
    /// <summary>Opens for reading from front to back.</summary>
    public static FileStream OpenSequential(string path, string file, int bufferBytes = 1 << 16)
    {
        try
        {
            return new FileStream(path, new FileStreamOptions
            {
                Mode = FileMode.Open,
                Access = FileAccess.Read,
                Share = FileShare.Read,
                Options = FileOptions.SequentialScan,
                BufferSize = bufferBytes,
            });
        }
        catch (Exception failure) when (failure is IOException or UnauthorizedAccessException)
        {
            throw CannotOpen(file, failure);
        }
    }

    /// <summary>Reads a whole file that may have at most <paramref name="largestBytes"/>.</summary>
    public static byte[] ReadAll(string path, string file, long largestBytes)
    {
        using FileStream stream = OpenSequential(path, file);
        if (stream.Length > largestBytes)
        {
            throw new BadInputException(file, null, $"the file has {stream.Length} bytes, more than the {largestBytes} that are read", "check that it is the right file");
        }

        byte[] bytes = new byte[stream.Length];
        try
        {
            stream.ReadExactly(bytes);
        }
        catch (IOException failure)
        {
            throw new BadInputException(file, null, "the file cannot be read to its end", "copy it again from the bench", failure);
        }

        return bytes;
    }

    /// <summary>The failure of a file that does not open.</summary>
    public static BadInputException CannotOpen(string file, Exception failure) => failure switch
    {
        FileNotFoundException or DirectoryNotFoundException => new BadInputException(file, null, "there is no such file", "check the name and the folder", failure),
        UnauthorizedAccessException => new BadInputException(file, null, "the file may not be read, or is a folder", "give yourself the right to read it", failure),
        _ => new BadInputException(file, null, "the file cannot be opened", "check the disk and the name", failure),
    };
}
