using System.Text.RegularExpressions;
using Xunit;

namespace TmLab.RulesTests;

public sealed partial class SourceRuleTests
{
    [Fact]
    public void There_are_sources_to_look_at() => Assert.True(SourceTree.Sources().Count() > 40);

    [Fact]
    public void Bare_exceptions_are_never_thrown()
    {
        Assert.Matches(BareThrow(), "throw new Exception(");
        Assert.Empty(Matches(BareThrow()));
    }

    /// <summary>Names that say nothing of what is in the file.</summary>
    [Fact]
    public void No_file_is_called_after_nothing()
    {
        Assert.Matches(EmptyName(), "src/TmLab/Matrix/MatrixHelpers.cs");
        Assert.DoesNotContain(SourceTree.Sources(), f => EmptyName().IsMatch(f.Name));
    }

    /// <summary>The compiler demands documentation of every public member; nobody may silence it.</summary>
    [Fact]
    public void Documentation_of_public_members_is_demanded()
    {
        string[] projects = [.. SourceTree.AllFiles().Where(f => f.EndsWith(".csproj", StringComparison.Ordinal) || f.EndsWith(".props", StringComparison.Ordinal))];
        string root = File.ReadAllText(projects.Single(f => SourceTree.NameOf(f) == "Directory.Build.props"));
        Assert.Contains("<GenerateDocumentationFile>true</GenerateDocumentationFile>", root, StringComparison.Ordinal);
        Assert.Contains("<TreatWarningsAsErrors>true</TreatWarningsAsErrors>", root, StringComparison.Ordinal);

        IEnumerable<string> silenced = projects
            .Where(f => SourceTree.NameOf(f).StartsWith("src/", StringComparison.Ordinal))
            .Where(f => File.ReadAllText(f).Contains("1591", StringComparison.Ordinal) || File.ReadAllText(f).Contains("GenerateDocumentationFile", StringComparison.Ordinal))
            .Select(SourceTree.NameOf);
        Assert.Empty(silenced);
        Assert.Empty(Matches(SilencedWarning()));
    }

    private static IEnumerable<string> Matches(Regex pattern) => SourceTree.Sources()
        .SelectMany(f => pattern.Matches(f.Code).Select(m => $"{f.Name}: {m.Value.Trim()}"));

    [GeneratedRegex(@"\bnew\s+(System\.)?(Exception|SystemException|ApplicationException)\s*\(")]
    private static partial Regex BareThrow();

    [GeneratedRegex(@"(Util|Utils|Utility|Utilities|Helper|Helpers|Manager|Misc|Common)\.cs$")]
    private static partial Regex EmptyName();

    [GeneratedRegex(@"#pragma\s+warning\s+disable[^\n]*(CS)?1591")]
    private static partial Regex SilencedWarning();
}
