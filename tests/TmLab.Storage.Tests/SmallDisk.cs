using System.Diagnostics;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests;

/// <summary>
/// A disk of a test's own, in memory, that can be full or read-only: permissions alone do not stop a test that runs as root. Where it
/// cannot be mounted (no root, no Linux) the test is skipped with a reason; with CI=true that is a failure.
/// </summary>
internal sealed class SmallDisk : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    private SmallDisk()
    {
    }

    public string Path => _folder.Path;

    public static SmallDisk Mount(int bytes, bool readOnly = false)
    {
        var disk = new SmallDisk();
        if (Run("mount", "-t", "tmpfs", "-o", $"size={bytes}{(readOnly ? ",ro" : "")}", "tmpfs", disk.Path))
        {
            return disk;
        }

        disk._folder.Dispose();
        const string reason = "needs the right to mount a small disk in memory";
        Assert.False(Environment.GetEnvironmentVariable("CI") == "true", reason);
        Assert.Skip(reason);
        return disk;
    }

    public string File(string name) => System.IO.Path.Combine(Path, name);

    public void Dispose()
    {
        Run("umount", Path);
        _folder.Dispose();
    }

    private static bool Run(string program, params string[] arguments)
    {
        try
        {
            using Process? process = Process.Start(new ProcessStartInfo(program, arguments) { RedirectStandardError = true });
            process?.WaitForExit();
            return process?.ExitCode == 0;
        }
        catch (System.ComponentModel.Win32Exception)
        {
            return false;
        }
    }
}
