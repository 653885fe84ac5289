using Microsoft.Win32.SafeHandles;
using TmLab.Failures;

namespace TmLab.Storage.AtomicFiles;

/// <summary>
/// An output that appears whole or not at all. It is written beside its target under a temporary name, flushed to the disk and then
/// renamed; until then, and for ever when it fails, is cancelled or the process is killed, whatever stood under the final name stays
/// untouched. Only one writer at a time may prepare the same output.
/// </summary>
/// <remarks>Begin, write to <see cref="TemporaryPath"/>, <see cref="Commit"/>; disposing without committing withdraws the output.</remarks>
public sealed class AtomicOutput : IDisposable
{
    /// <summary>What is appended to the final name while the output is being written. A file so named is never whole.</summary>
    public const string TemporarySuffix = ".tmlab-part";

    /// <summary>What is appended to the final name for the lock file.</summary>
    public const string LockSuffix = ".tmlab-lock";

    private readonly OutputLock _lock;
    private readonly bool _overwrite;
    private bool _finished;

    private AtomicOutput(string finalPath, bool overwrite, OutputLock outputLock)
    {
        FinalPath = finalPath;
        _overwrite = overwrite;
        _lock = outputLock;
    }

    /// <summary>The output's final name, as the caller gave it.</summary>
    public string FinalPath { get; }

    /// <summary>Where to write; nothing stands there at the start.</summary>
    public string TemporaryPath => FinalPath + TemporarySuffix;

    /// <summary>Claims an output name and sweeps what a killed run left of it.</summary>
    /// <param name="path">The final name; its folder must exist.</param>
    /// <param name="overwrite">Whether a file of that name may be replaced.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to.</exception>
    public static AtomicOutput Begin(string path, bool overwrite)
    {
        RefuseTaken(path, overwrite);
        var output = new AtomicOutput(path, overwrite, OutputLock.Take(path));
        try
        {
            OutputFailures.Guard(path, () => File.Delete(output.TemporaryPath));
            return output;
        }
        catch
        {
            output.Dispose();
            throw;
        }
    }

    /// <summary>Writes a whole file through a callback that is given the temporary name; withdraws it when the callback throws.</summary>
    /// <param name="path">The final name.</param>
    /// <param name="overwrite">Whether a file of that name may be replaced.</param>
    /// <param name="write">Creates the file at the name that it is given and closes it.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to, or the disk is full.</exception>
    public static void Write(string path, bool overwrite, Action<string> write)
    {
        using AtomicOutput output = Begin(path, overwrite);
        OutputFailures.Guard(path, () => write(output.TemporaryPath));
        output.Commit();
    }

    /// <summary>Flushes the temporary file to the disk and gives it its final name. The file must be closed or shared for reading and writing.</summary>
    /// <exception cref="OutputException">The name has been taken meanwhile, or the disk refuses.</exception>
    public void Commit()
    {
        ObjectDisposedException.ThrowIf(_finished, this);
        RefuseTaken(FinalPath, _overwrite);
        OutputFailures.Guard(FinalPath, FlushAndRename);
        _finished = true;
        _lock.Dispose();
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        if (_finished)
        {
            return;
        }

        _finished = true;
        try
        {
            File.Delete(TemporaryPath);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // The failure that led here is already under way; the next writer of this name sweeps the file.
        }
        finally
        {
            _lock.Dispose();
        }
    }

    /// <summary>Refuses a name that is taken: for callers that have long work to do before they begin the output.</summary>
    /// <exception cref="OutputException">A folder stands there, or a file that may not be replaced.</exception>
    public static void RefuseTaken(string path, bool overwrite)
    {
        if (Directory.Exists(path))
        {
            throw new OutputException(path, OutputFailure.Exists, "it is a folder: choose another name");
        }

        if (!overwrite && File.Exists(path))
        {
            throw new OutputException(path, OutputFailure.Exists, "choose another name or ask for it to be replaced");
        }
    }

    private void FlushAndRename()
    {
        using (SafeFileHandle file = File.OpenHandle(
            TemporaryPath, FileMode.Open, FileAccess.ReadWrite, FileShare.ReadWrite | FileShare.Delete))
        {
            RandomAccess.FlushToDisk(file);
        }

        File.Move(TemporaryPath, FinalPath, _overwrite);
        FolderSync.FlushFolderOf(FinalPath);
    }
}
