using System.Diagnostics;
using TmLab.EndToEndTests.Running;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

public sealed class InterruptionTests
{
    private const string Manifest = """
        {
          "format": "tm-measurement", "version": 1,
          "camera": {"width": 512, "height": 512, "bit_depth": 12},
          "frames": {"kind": "raw", "path": "frames.raw", "pixel": "uint16-le"},
          "schedule": {"order": "mode-major", "steps": 4},
          "modes": {"basis": "hadamard", "count": 256, "grid": [16, 16]}
        }
        """;

    [Theory]
    [InlineData("INT")]
    [InlineData("TERM")]
    public void A_signal_in_the_middle_of_a_stage_gives_130_and_leaves_nothing_half_written(string signal)
    {
        Assert.SkipWhen(OperatingSystem.IsWindows(), "there are no signals to send");
        using var folder = new TemporaryFolder();
        MakeLargeMeasurement(folder.File("bench"));

        using Process process = Tool.Start(folder, "ingest", "bench", "-o", "m.h5");
        WaitForPartialOutput(folder, process);
        Send(signal, process.Id);
        ToolResult result = Tool.Finish(process, TimeSpan.FromSeconds(30));

        Assert.True(result.ExitCode == 130, result.ToString());
        Assert.Equal("", result.Stdout);
        Assert.StartsWith("tmlab: interrupted", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.Empty(folder.FileNames);
    }

    /// <summary>
    /// 1,024 frames of 512 × 512 pixels, all zero: the file takes no room on the disk, and reading it takes long enough to be
    /// interrupted. Run to its end it would be refused, as there is no light.
    /// </summary>
    private static void MakeLargeMeasurement(string folder)
    {
        Directory.CreateDirectory(folder);
        File.WriteAllText(Path.Combine(folder, "measurement.json"), Manifest);
        using FileStream frames = File.Create(Path.Combine(folder, "frames.raw"));
        frames.SetLength(1024L * 512 * 512 * 2);
    }

    /// <summary>The stage is at work once something stands beside its output's name.</summary>
    private static void WaitForPartialOutput(TemporaryFolder folder, Process process)
    {
        var waited = Stopwatch.StartNew();
        while (folder.FileNames.Count == 0 && !process.HasExited && waited.Elapsed < TimeSpan.FromSeconds(30))
        {
            Thread.Sleep(1);
        }
    }

    private static void Send(string signal, int process)
    {
        using var kill = Process.Start("kill", [$"-{signal}", process.ToString(System.Globalization.CultureInfo.InvariantCulture)]);
        kill.WaitForExit();
    }
}
