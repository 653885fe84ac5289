using System.Text.Json;
using TmLab.EndToEndTests.Running;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

public sealed class AboutTests
{
    [Fact]
    public void As_json_it_is_one_object_with_its_schema_first()
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, "about", "--json");

        Assert.True(result.ExitCode == 0, result.ToString());
        using JsonDocument document = JsonDocument.Parse(result.Stdout);
        JsonProperty[] members = [.. document.RootElement.EnumerateObject()];
        Assert.Equal("schema", members[0].Name);
        Assert.Equal("tmlab.about", members[0].Value.GetString());
        Assert.Equal("schema_version", members[1].Name);
        Assert.Equal(1, members[1].Value.GetInt32());
        Assert.Contains(document.RootElement.GetProperty("libraries").EnumerateArray(), l => l.GetProperty("name").GetString() == "PureHDF");
    }

    [Fact]
    public void A_reader_that_goes_away_is_no_failure()
    {
        Assert.SkipWhen(OperatingSystem.IsWindows(), "pipes are tried with bash");
        using var folder = new TemporaryFolder();
        string[] arguments = ["-c", $"dotnet '{Tool.ProgramFile}' about --json | true; echo ${{PIPESTATUS[0]}}"];
        using var process = Tool.StartProgram("bash", folder.Path, arguments, new Dictionary<string, string>());
        ToolResult result = Tool.Finish(process, TimeSpan.FromSeconds(30));

        Assert.Equal("0", result.Stdout.Trim());
        Assert.Equal("", result.Stderr);
    }
}
