using TmLab.TestKit;
using Xunit;

namespace TmLab.RulesTests;

/// <summary>The public surface of the libraries changes on purpose: it is a text that is reviewed like code.</summary>
public sealed class PublicApiTests
{
    private const string AcceptVariable = "TMLAB_ACCEPT_PUBLIC_API";

    [Theory]
    [InlineData("TmLab")]
    [InlineData("TmLab.Numerics")]
    public void The_public_surface_is_the_accepted_one(string assembly)
    {
        string name = $"tests/TmLab.RulesTests/PublicApi/{assembly}.txt";
        string file = RepositoryFolder.Combine(name);
        string found = PublicApiListing.Of(assembly);
        if (Environment.GetEnvironmentVariable(AcceptVariable) == "1")
        {
            Directory.CreateDirectory(Path.GetDirectoryName(file)!);
            File.WriteAllText(file, found);
        }

        string[] accepted = File.Exists(file) ? File.ReadAllLines(file) : [];
        string[] now = found.Split('\n', StringSplitOptions.RemoveEmptyEntries);
        Assert.True(accepted.SequenceEqual(now), Explain(name, accepted, now));
    }

    private static string Explain(string name, string[] accepted, string[] now)
    {
        IEnumerable<string> changes = accepted.Except(now).Select(l => "- " + l.Trim()).Concat(now.Except(accepted).Select(l => "+ " + l.Trim()));
        return $"""
            The public surface differs from {name}:
            {string.Join('\n', changes.Take(40))}
            If this is meant, accept it and commit the file:
            {AcceptVariable}=1 dotnet test -c Release --project tests/TmLab.RulesTests
            """;
    }
}
