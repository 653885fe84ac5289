using System.Reflection;
using System.Xml.Linq;
using TmLab.TestKit;
using Xunit;

namespace TmLab.RulesTests;

/// <summary>Numerics ← TmLab ← {Storage, Reporting} ← {Cli, View}; each outside library behind one door.</summary>
public sealed class ProjectDirectionTests
{
    private static readonly Dictionary<string, string[]> AllowedProjects = new()
    {
        ["TmLab.Numerics"] = [],
        ["TmLab"] = ["TmLab.Numerics"],
        ["TmLab.Storage"] = ["TmLab", "TmLab.Numerics"],
        ["TmLab.Reporting"] = ["TmLab", "TmLab.Numerics"],
        ["TmLab.View"] = ["TmLab.Storage", "TmLab.Reporting", "TmLab", "TmLab.Numerics"],
        ["TmLab.Cli"] = ["TmLab.View", "TmLab.Storage", "TmLab.Reporting", "TmLab", "TmLab.Numerics"],
    };

    /// <summary>Which project may use which outside assembly; the program's base library is not listed.</summary>
    private static readonly Dictionary<string, string[]> AllowedLibraries = new()
    {
        ["TmLab.Numerics"] = ["MathNet.Numerics"],
        // Special functions of the theory curves.
        ["TmLab"] = ["MathNet.Numerics"],
        ["TmLab.Storage"] = ["PureHDF", "BitMiracle.LibTiff.NET", "SixLabors.ImageSharp", "System.IO.Hashing"],
        ["TmLab.Reporting"] = ["SixLabors.ImageSharp"],
        ["TmLab.View"] = [],
        ["TmLab.Cli"] = ["System.CommandLine"],
    };

    public static TheoryData<string> Projects =>
        [.. Directory.EnumerateDirectories(RepositoryFolder.Combine("src")).Select(d => Path.GetFileName(d)).Order(StringComparer.Ordinal)];

    [Theory]
    [MemberData(nameof(Projects))]
    public void A_project_file_names_only_what_stands_before_it(string project)
    {
        Assert.True(AllowedProjects.ContainsKey(project), $"{project} has no place in the order of projects; give it one here");
        XDocument file = XDocument.Load(RepositoryFolder.Combine($"src/{project}/{project}.csproj"));

        Assert.Empty(Included(file, "ProjectReference").Select(p => Path.GetFileNameWithoutExtension(p)).Except(AllowedProjects[project]));
        Assert.Empty(Included(file, "PackageReference").Except(AllowedLibraries[project]));
    }

    /// <summary>References pass through project references, so a project could use a library that its file does not name.</summary>
    [Theory]
    [MemberData(nameof(Projects))]
    public void A_built_assembly_uses_only_what_it_may(string project)
    {
        string[] used = [.. Assembly.Load(project).GetReferencedAssemblies().Select(a => a.Name!)];
        IEnumerable<string> allowed = AllowedProjects[project].Concat(AllowedLibraries[project]);

        Assert.NotEmpty(used);
        Assert.Empty(used.Where(a => !IsBaseLibrary(a)).Except(allowed));
    }

    private static IEnumerable<string> Included(XDocument project, string element) =>
        project.Descendants(element).Select(e => e.Attribute("Include")!.Value.Replace('\\', '/'));

    private static bool IsBaseLibrary(string assembly) =>
        File.Exists(Path.Combine(Path.GetDirectoryName(typeof(object).Assembly.Location)!, assembly + ".dll"));
}
