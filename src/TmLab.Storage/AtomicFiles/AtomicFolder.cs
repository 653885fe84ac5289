using TmLab.Failures;

namespace TmLab.Storage.AtomicFiles;

/// <summary>
/// A folder that appears whole or not at all: it is filled beside its target under a temporary name and then renamed. An existing
/// folder is replaced only where that was asked for and where it holds the file that marks it as one of its kind, so that no folder of
/// other things can be lost.
/// </summary>
/// <remarks>Begin, write into <see cref="TemporaryPath"/>, <see cref="Commit"/>; disposing without committing withdraws the folder.</remarks>
public sealed class AtomicFolder : IDisposable
{
    private const string ReplacedSuffix = ".tmlab-replaced";

    private readonly OutputLock _lock;
    private readonly bool _overwrite;
    private readonly string _mark;
    private bool _finished;

    private AtomicFolder(string finalPath, bool overwrite, string mark, OutputLock outputLock)
    {
        FinalPath = finalPath;
        _overwrite = overwrite;
        _mark = mark;
        _lock = outputLock;
    }

    /// <summary>The folder's final name, without a separator at its end.</summary>
    public string FinalPath { get; }

    /// <summary>The folder to write into; empty at the start.</summary>
    public string TemporaryPath => FinalPath + AtomicOutput.TemporarySuffix;

    /// <summary>Claims a name and sweeps what a killed run left of it.</summary>
    /// <param name="path">The final name; the folder around it must exist.</param>
    /// <param name="overwrite">Whether a folder of that name may be replaced.</param>
    /// <param name="mark">The file that a folder must hold to be replaced.</param>
    /// <exception cref="OutputException">The name is taken, busy or cannot be written to.</exception>
    public static AtomicFolder Begin(string path, bool overwrite, string mark)
    {
        string final = Path.TrimEndingDirectorySeparator(path);
        RefuseTaken(final, overwrite, mark);
        var folder = new AtomicFolder(final, overwrite, mark, OutputLock.Take(final));
        try
        {
            OutputFailures.Guard(final, folder.Sweep);
            OutputFailures.Guard(final, () => Directory.CreateDirectory(folder.TemporaryPath));
            return folder;
        }
        catch
        {
            folder.Dispose();
            throw;
        }
    }

    /// <summary>Refuses a name that is taken.</summary>
    /// <exception cref="OutputException">A file stands there, or a folder that may not be replaced.</exception>
    public static void RefuseTaken(string path, bool overwrite, string mark)
    {
        if (File.Exists(path))
        {
            throw new OutputException(path, OutputFailure.Exists, "it is a file: choose another name");
        }

        if (!Directory.Exists(path))
        {
            return;
        }

        if (!overwrite)
        {
            throw new OutputException(path, OutputFailure.Exists, "give another name or --force");
        }

        if (!File.Exists(Path.Combine(path, mark)))
        {
            throw new OutputException(path, OutputFailure.Exists, $"it holds no {mark}, so it is not replaced: choose another name");
        }
    }

    /// <summary>A file in the folder, for writing.</summary>
    public FileStream Create(string name) => new(Path.Combine(TemporaryPath, name), FileMode.CreateNew, FileAccess.Write, FileShare.None, 1 << 20);

    /// <summary>Gives the folder its final name.</summary>
    /// <exception cref="OutputException">The name has been taken meanwhile, or the disk refuses.</exception>
    public void Commit()
    {
        ObjectDisposedException.ThrowIf(_finished, this);
        RefuseTaken(FinalPath, _overwrite, _mark);
        OutputFailures.Guard(FinalPath, Rename);
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
            DeleteIfThere(TemporaryPath);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // The failure that led here is already under way; the next writer of this name sweeps the folder.
        }
        finally
        {
            _lock.Dispose();
        }
    }

    private static void DeleteIfThere(string folder)
    {
        if (Directory.Exists(folder))
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private void Sweep()
    {
        DeleteIfThere(TemporaryPath);
        string replaced = FinalPath + ReplacedSuffix;
        if (Directory.Exists(replaced) && !Directory.Exists(FinalPath))
        {
            // A run was killed between the two renames: what it was about to replace goes back.
            Directory.Move(replaced, FinalPath);
        }

        DeleteIfThere(replaced);
    }

    private void Rename()
    {
        string replaced = FinalPath + ReplacedSuffix;
        bool replaces = Directory.Exists(FinalPath);
        if (replaces)
        {
            Directory.Move(FinalPath, replaced);
        }

        Directory.Move(TemporaryPath, FinalPath);
        FolderSync.FlushFolderOf(FinalPath);
        if (replaces)
        {
            DeleteIfThere(replaced);
        }
    }
}
