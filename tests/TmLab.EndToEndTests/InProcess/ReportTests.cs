using System.Text.Json;
using TmLab.Cli.Options;
using TmLab.EndToEndTests.Running;
using TmLab.Quantities;
using Xunit;
using TmLab.Numerics.LinearAlgebra;

namespace TmLab.EndToEndTests.InProcess;

public sealed class ReportTests
{
    [Fact]
    public void Json_has_its_schema_first_snake_case_names_with_units_and_null_for_what_is_not_known()
    {
        ToolResult result = InProcessTool.Run(new FakeStages(), "reconstruct", "m.h5", "-o", "t.h5", "--json");

        Assert.Equal(0, result.ExitCode);
        using JsonDocument document = JsonDocument.Parse(result.Stdout);
        string[] expected =
        [
            "schema", "schema_version", "input", "output", "pixel_count", "mode_count", "valid_pixel_count", "valid_mode_count",
            "drift_method", "tracker_count", "drift_range_rad", "largest_tracker_gap_rad", "smallest_tracker_overlap",
            "walk_rate_rad2_per_s", "largest_step_error_rad", "power_spread", "mean_visibility", "signal_to_noise", "rows_normalised", "elapsed_s", "warnings",
        ];
        Assert.Equal(expected, document.RootElement.EnumerateObject().Select(m => m.Name));
        Assert.Equal("tmlab.reconstruct", document.RootElement.GetProperty("schema").GetString());
        Assert.Equal(JsonValueKind.Null, document.RootElement.GetProperty("signal_to_noise").ValueKind);
        Assert.Equal(1.25, document.RootElement.GetProperty("drift_range_rad").GetDouble());
        Assert.Equal("trackers_interpolated", document.RootElement.GetProperty("drift_method").GetString());
    }

    [Fact]
    public void Text_shows_the_same_figures_and_warnings_go_to_stderr()
    {
        ToolResult result = InProcessTool.Run(new FakeStages(), "reconstruct", "m.h5", "-o", "t.h5");

        Assert.StartsWith("Reconstructed m.h5 into t.h5", result.Stdout, StringComparison.Ordinal);
        Assert.Contains("1.25 rad over 3 showings of the tracked pattern", result.Stdout, StringComparison.Ordinal);
        Assert.Contains("0.75 rad from one tracker to the next", result.Stdout, StringComparison.Ordinal);
        Assert.Contains("not known", result.Stdout, StringComparison.Ordinal);
        Assert.Equal(["warning: One pixel is not valid."], result.ErrorLines);
    }

    [Fact]
    public void Quiet_leaves_the_result_alone_on_stdout()
    {
        ToolResult result = InProcessTool.Run(new FakeStages(), "reconstruct", "m.h5", "-o", "t.h5", "--quiet");

        Assert.NotEqual("", result.Stdout);
        Assert.Equal("", result.Stderr);
    }

    [Fact]
    public void Common_options_reach_the_stage()
    {
        var stages = new FakeStages();
        InProcessTool.Run(
            stages, "reconstruct", "m.h5", "-o", "t.h5", "--force", "--memory", "1.5GiB", "--engine", "managed", "--threads", "3");

        CommonSettings expected = new(
            Force: true, Json: false, Quiet: false, Verbose: false, MemoryBytes: 3L << 29, EngineChoice.Managed, Threads: 3);
        Assert.Equal(expected, stages.LastContext!.Settings);
    }

    [Fact]
    public void Every_focus_reaches_the_mask_in_order()
    {
        var stages = new FakeStages();
        ToolResult result = InProcessTool.Run(stages, "mask", "t.h5", "--focus", "24,20", "--focus", "3,40", "-o", "m.png");

        Assert.True(result.ExitCode == 0, result.ToString());
        Assert.Equal([new CameraPixel(24, 20), new CameraPixel(3, 40)], stages.LastMask!.Targets);
    }
}
