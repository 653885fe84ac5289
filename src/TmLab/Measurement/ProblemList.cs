using System.Collections.Immutable;
using TmLab.Failures;

namespace TmLab.Measurement;

/// <summary>Collects the problems of one file, the first few of each kind in full and the rest as a count. Not thread-safe.</summary>
/// <param name="file">The file's name for messages.</param>
public sealed class ProblemList(string file)
{
    /// <summary>How many problems of one kind are listed before the rest are only counted.</summary>
    public const int ListedOfOneKind = 5;

    private readonly List<InputProblem> _problems = [];

    /// <summary>The file's name for messages.</summary>
    public string File { get; } = file;

    /// <summary>Whether nothing was found.</summary>
    public bool IsEmpty => _problems.Count == 0;

    /// <summary>Adds one problem; see <see cref="InputProblem"/>.</summary>
    public void Add(string? place, string found, string remedy) => _problems.Add(new InputProblem(File, place, found, remedy));

    /// <summary>Adds problems that were found elsewhere.</summary>
    public void Add(IEnumerable<InputProblem> problems) => _problems.AddRange(problems);

    /// <summary>
    /// Adds problems of one kind: the first <see cref="ListedOfOneKind"/> in full, then one line that counts the others, so that a
    /// schedule that is wrong throughout does not print a million lines.
    /// </summary>
    public void AddOfOneKind(IEnumerable<(string Place, string Found, string Remedy)> found)
    {
        int count = 0;
        foreach ((string place, string what, string remedy) in found)
        {
            if (++count <= ListedOfOneKind)
            {
                Add(place, what, remedy);
            }
        }

        if (count > ListedOfOneKind)
        {
            Add(null, $"{count - ListedOfOneKind} more problems of the same kind", "mend the ones listed first");
        }
    }

    /// <summary>The problems in the order of finding.</summary>
    public ImmutableArray<InputProblem> ToImmutable() => [.. _problems];

    /// <summary>Stops if there is any problem.</summary>
    /// <exception cref="BadInputException">There is; it carries them all.</exception>
    public void ThrowIfAny()
    {
        if (!IsEmpty)
        {
            throw new BadInputException(ToImmutable());
        }
    }
}
