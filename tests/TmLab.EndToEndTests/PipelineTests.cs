using System.Text.Json;
using TmLab.EndToEndTests.Running;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

/// <summary>The whole job, as a user types it, on the shipped measurement.</summary>
public sealed class PipelineTests
{
    private static readonly string Demo = RepositoryFolder.Combine("data-demo");

    [Fact]
    public void Stage_by_stage_from_folder_to_mask()
    {
        using var folder = new TemporaryFolder();
        JsonElement ingest = Succeed(folder, "ingest", Demo, "-o", "m.h5");
        JsonElement matrix = Succeed(folder, "reconstruct", "m.h5", "-o", "t.h5");
        JsonElement channels = Succeed(folder, "channels", "t.h5", "-o", "c.h5");
        JsonElement mask = Succeed(folder, "mask", "t.h5", "--focus", "17,17", "--focus", "3,30", "-o", "mask.png");

        // The numbers of the shipped manifest and schedule.
        Assert.Equal("tmlab.ingest", ingest.GetProperty("schema").GetString());
        Assert.Equal(1104, ingest.GetProperty("frame_count").GetInt32());
        Assert.Equal(36 * 36, matrix.GetProperty("pixel_count").GetInt32());
        Assert.Equal(256, matrix.GetProperty("mode_count").GetInt32());
        Assert.Equal(256, channels.GetProperty("singular_value_count").GetInt32());
        Assert.Equal([(17, 17), (3, 30)], mask.GetProperty("targets").EnumerateArray().Select(t => (t.GetProperty("x").GetInt32(), t.GetProperty("y").GetInt32())));
        Assert.Equal(["c.h5", "m.h5", "mask.png", "mask.png.json", "t.h5"], folder.FileNames);
    }

    [Fact]
    public void All_in_one_gives_the_same_files_and_each_can_be_shown()
    {
        using var folder = new TemporaryFolder();
        JsonElement run = Succeed(folder, "run", Demo, "-o", "out", "--focus", "17,17");

        Assert.Equal("tmlab.run", run.GetProperty("schema").GetString());
        Assert.Equal(
            ["channels.h5", "mask.png", "mask.png.json", "matrix.h5", "measurement.h5"], FolderTree.Entries(folder.File("out")));
        Assert.Equal("tmlab-measurement", Succeed(folder, "show", "out/measurement.h5").GetProperty("format").GetString());
        Assert.Equal("tmlab-matrix", Succeed(folder, "show", "out/matrix.h5").GetProperty("format").GetString());
        Assert.Equal("tmlab-channels", Succeed(folder, "show", "out/channels.h5").GetProperty("format").GetString());
    }

    [Fact]
    public void The_demonstration_can_be_repeated()
    {
        using var folder = new TemporaryFolder();
        Succeed(folder, "demo");
        JsonElement again = Succeed(folder, "demo");

        Assert.Equal("tmlab.demo", again.GetProperty("schema").GetString());
        Assert.Contains("mask.png", FolderTree.Entries(folder.File("demo-out")));
    }

    [Fact]
    public void What_exists_is_kept_unless_force_is_given()
    {
        using var folder = new TemporaryFolder();
        File.WriteAllText(folder.File("m.h5"), "precious");

        ToolResult refused = Tool.Run(folder, "ingest", Demo, "-o", "m.h5");

        Assert.True(refused.ExitCode == 5, refused.ToString());
        Assert.Equal(["tmlab: m.h5: already exists; give another name or --force"], refused.ErrorLines);
        Assert.Equal("", refused.Stdout);
        Assert.Equal("precious", File.ReadAllText(folder.File("m.h5")));
        Succeed(folder, "ingest", Demo, "-o", "m.h5", "--force");
    }

    [Theory]
    [InlineData("show", "nothing.h5")]
    [InlineData("show", "text.h5")]
    [InlineData("reconstruct", "nothing.h5", "-o", "t.h5")]
    [InlineData("reconstruct", "text.h5", "-o", "t.h5")]
    [InlineData("channels", "nothing.h5", "-o", "c.h5")]
    [InlineData("mask", "nothing.h5", "--focus", "1,1", "-o", "mask.png")]
    [InlineData("ingest", "nowhere", "-o", "m.h5")]
    [InlineData("ingest", ".", "-o", "m.h5")]
    public void Input_that_is_missing_or_of_another_kind_gives_3_and_writes_nothing(params string[] arguments)
    {
        using var folder = new TemporaryFolder();
        File.WriteAllText(folder.File("text.h5"), "this is no HDF5 file");

        ToolResult result = Tool.Run(folder, arguments);

        Assert.True(result.ExitCode == 3, result.ToString());
        Assert.Equal("", result.Stdout);
        Assert.StartsWith($"tmlab: {arguments[1]}", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.Equal(["text.h5"], folder.FileNames);
    }

    [Fact]
    public void A_file_of_an_earlier_stage_is_told_apart()
    {
        using var folder = new TemporaryFolder();
        Succeed(folder, "ingest", Demo, "-o", "m.h5");

        ToolResult result = Tool.Run(folder, "channels", "m.h5", "-o", "c.h5");

        Assert.True(result.ExitCode == 3, result.ToString());
        Assert.StartsWith("tmlab: m.h5", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
    }

    [Fact]
    public void An_output_in_a_folder_that_is_not_there_gives_5()
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, "ingest", Demo, "-o", "no-such-folder/m.h5");

        Assert.True(result.ExitCode == 5, result.ToString());
        Assert.StartsWith("tmlab: no-such-folder/m.h5: cannot be written", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.Empty(FolderTree.Entries(folder.Path));
    }

    private static JsonElement Succeed(TemporaryFolder folder, params string[] arguments)
    {
        ToolResult result = Tool.Run(folder, [.. arguments, "--json"]);
        Assert.True(result.ExitCode == 0, result.ToString());
        using JsonDocument document = JsonDocument.Parse(result.Stdout);
        return document.RootElement.Clone();
    }
}
