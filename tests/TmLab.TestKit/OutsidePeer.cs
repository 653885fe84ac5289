using System.Diagnostics;
using Xunit;

namespace TmLab.TestKit;

/// <summary>
/// Programs from outside the project that judge its files. Where one is missing the test is skipped with a reason; in continuous
/// integration (environment variable CI=true) a missing one fails the test.
/// </summary>
public sealed class OutsidePeer
{
    private static readonly TimeSpan s_timeout = TimeSpan.FromSeconds(60);
    private readonly string _program;
    private readonly string[] _firstArguments;

    private OutsidePeer(string program, params string[] firstArguments)
    {
        _program = program;
        _firstArguments = firstArguments;
    }

    /// <summary>Python 3 with NumPy and h5py (Debian packages python3-numpy, python3-h5py).</summary>
    public static OutsidePeer Python()
    {
        var python = new OutsidePeer("/usr/bin/python3", "-I");
        Require(
            File.Exists(python._program) && python.Try(["-c", "import numpy, h5py"]).ExitCode == 0,
            "/usr/bin/python3 with numpy and h5py (packages python3-numpy, python3-h5py)");
        return python;
    }

    /// <summary>The HDF Group's <c>h5dump</c> (Debian package hdf5-tools).</summary>
    public static OutsidePeer H5Dump() => Hdf5Tool("h5dump");

    /// <summary>The HDF Group's <c>h5repack</c> (Debian package hdf5-tools).</summary>
    public static OutsidePeer H5Repack() => Hdf5Tool("h5repack");

    /// <summary>Runs the program and returns what it printed; fails the test when it ends with another code than 0.</summary>
    public string Run(params string[] arguments)
    {
        (int exitCode, string output, string errors) = Try(arguments);
        Assert.True(exitCode == 0, $"{_program} ended with code {exitCode}: {errors}");
        return output;
    }

    /// <summary>Runs a Python script given as text; its arguments are in sys.argv[1:].</summary>
    public string RunScript(string script, params string[] arguments) => Run(["-c", script, .. arguments]);

    private static OutsidePeer Hdf5Tool(string name)
    {
        string path = "/usr/bin/" + name;
        Require(File.Exists(path), $"{path} (package hdf5-tools)");
        return new OutsidePeer(path);
    }

    private static void Require(bool found, string what)
    {
        if (found)
        {
            return;
        }

        string reason = $"needs {what}, which is not installed";
        Assert.False(Environment.GetEnvironmentVariable("CI") == "true", reason);
        Assert.Skip(reason);
    }

    private (int ExitCode, string Output, string Errors) Try(string[] arguments)
    {
        var start = new ProcessStartInfo(_program) { RedirectStandardOutput = true, RedirectStandardError = true, UseShellExecute = false };
        foreach (string argument in _firstArguments.Concat(arguments))
        {
            start.ArgumentList.Add(argument);
        }

        using Process process = Process.Start(start) ?? throw new InvalidOperationException($"{_program} did not start.");
        Task<string> output = process.StandardOutput.ReadToEndAsync();
        Task<string> errors = process.StandardError.ReadToEndAsync();
        if (!process.WaitForExit(s_timeout))
        {
            process.Kill(entireProcessTree: true);
            Assert.Fail($"{_program} did not end within {s_timeout.TotalSeconds} s.");
        }

        return (process.ExitCode, output.GetAwaiter().GetResult(), errors.GetAwaiter().GetResult());
    }
}
