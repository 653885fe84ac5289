using System.Globalization;
using System.Runtime.InteropServices;
using System.Text.RegularExpressions;
using TmLab.EndToEndTests.Running;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

/// <summary>Stages keep to the memory that they are given, whatever the size of the measurement.</summary>
public sealed partial class MemoryTests
{
    private const int Side = 256, Modes = 256, Steps = 12;
    private const long BudgetMiB = 64, AllowanceMiB = 250;

    [Fact]
    public void A_measurement_six_times_the_budget_is_taken_in_reconstructed_and_decomposed_within_it()
    {
        using var folder = new TemporaryFolder();
        long measurementMiB = WriteMeasurement(folder);
        // What the bound would let pass if a stage held all of its input is smaller than the input.
        Assert.True(measurementMiB > BudgetMiB + AllowanceMiB);
        Assert.InRange(PeakMiB(folder, "ingest", "m", "-o", "m.h5"), 1, BudgetMiB + AllowanceMiB);
        Assert.InRange(PeakMiB(folder, "reconstruct", "m.h5", "-o", "t.h5"), 1, BudgetMiB + AllowanceMiB);
        Assert.InRange(PeakMiB(folder, "channels", "t.h5", "-o", "c.h5", "--top", "8"), 1, BudgetMiB + AllowanceMiB);
    }

    private static double PeakMiB(TemporaryFolder folder, params string[] arguments)
    {
        ToolResult result = Tool.Run(folder, [.. arguments, "--memory", $"{BudgetMiB}MiB", "--verbose"]);
        Assert.True(result.ExitCode == 0, result.ToString());
        Match peak = PeakMemory().Match(result.Stderr);
        Assert.True(peak.Success, result.ToString());
        return double.Parse(peak.Groups["number"].Value, CultureInfo.InvariantCulture) * (peak.Groups["unit"].Value == "GiB" ? 1024 : 1);
    }

    // 3,072 frames of 128 KiB. The fields of 16 patterns are drawn; the others are sums of two of them.
    private static long WriteMeasurement(TemporaryFolder folder)
    {
        folder.Write("m/measurement.json", $$"""
            {"format": "tm-measurement", "version": 1, "camera": {"width": {{Side}}, "height": {{Side}}, "bit_depth": 12 },
             "frames": {"kind": "raw", "path": "frames.raw", "pixel": "uint16-le"},
             "schedule": {"order": "mode-major", "steps": {{Steps}} },
             "modes": {"basis": "hadamard", "count": {{Modes}}, "grid": [16, 16] } }
            """);
        const int pixels = Side * Side;
        var random = new Random(1);
        (float Re, float Im)[][] fields = [.. Enumerable.Range(0, 16).Select(_ => Enumerable.Range(0, pixels)
            .Select(_ => ((random.NextSingle() - 0.5f) * 300, (random.NextSingle() - 0.5f) * 300)).ToArray())];
        var frame = new ushort[pixels];
        using FileStream file = File.Create(folder.File("m/frames.raw"));
        for (int k = 0; k < Modes; k++)
        {
            for (int s = 0; s < Steps; s++)
            {
                (float sin, float cos) = MathF.SinCos(2 * MathF.PI * s / Steps);
                (float, float)[] a = fields[k % 16], b = fields[k / 16];
                for (int p = 0; p < pixels; p++)
                {
                    frame[p] = (ushort)(1000 + ((a[p].Item1 + b[p].Item1) * cos) - ((a[p].Item2 + b[p].Item2) * sin));
                }

                file.Write(MemoryMarshal.AsBytes<ushort>(frame));
            }
        }

        return file.Length >> 20;
    }

    [GeneratedRegex(@"peak memory (?<number>[0-9.,]+) (?<unit>MiB|GiB)")]
    private static partial Regex PeakMemory();
}
