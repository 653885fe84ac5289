using System.Diagnostics;
using System.Reflection;
using TmLab.TestKit;

namespace TmLab.EndToEndTests.Running;

/// <summary>What a finished process left: its exit code and its two streams.</summary>
internal sealed record ToolResult(int ExitCode, string Stdout, string Stderr)
{
    public IReadOnlyList<string> ErrorLines => Stderr.Split('\n', StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries);

    /// <summary>All of it, for the message of a failed assertion.</summary>
    public override string ToString() => $"exit code {ExitCode}\nstdout:\n{Stdout}\nstderr:\n{Stderr}";
}

/// <summary>Runs the program that was built, as a process of its own.</summary>
internal static class Tool
{
    private static readonly TimeSpan Timeout = TimeSpan.FromSeconds(60);

    /// <summary>The program's file.</summary>
    public static string ProgramFile { get; } = Assembly.Load("TmLab.Cli").Location;

    /// <summary>Runs it in a folder and waits for its end.</summary>
    public static ToolResult Run(TemporaryFolder folder, params string[] arguments)
    {
        using Process process = Start(folder, arguments);
        return Finish(process, Timeout);
    }

    /// <summary>Starts it in a folder.</summary>
    public static Process Start(TemporaryFolder folder, params string[] arguments) =>
        StartProgram("dotnet", folder.Path, [ProgramFile, .. arguments], new Dictionary<string, string>());

    /// <summary>Starts any program with redirected streams.</summary>
    public static Process StartProgram(
        string program, string folder, IEnumerable<string> arguments, IReadOnlyDictionary<string, string> environment)
    {
        var start = new ProcessStartInfo(program, arguments)
        {
            WorkingDirectory = folder,
            RedirectStandardInput = true,
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        foreach ((string name, string value) in environment)
        {
            start.Environment[name] = value;
        }

        Process process = Process.Start(start)!;
        process.StandardInput.Close();
        return process;
    }

    /// <summary>Reads both streams to their end; a process that outlives the timeout is killed and the test fails.</summary>
    public static ToolResult Finish(Process process, TimeSpan timeout)
    {
        Task<string> output = process.StandardOutput.ReadToEndAsync();
        Task<string> error = process.StandardError.ReadToEndAsync();
        if (!process.WaitForExit(timeout))
        {
            process.Kill(entireProcessTree: true);
            throw new TimeoutException($"still running after {timeout.TotalSeconds} s\nstdout:\n{output.Result}\nstderr:\n{error.Result}");
        }

        return new ToolResult(process.ExitCode, output.Result, error.Result);
    }
}
