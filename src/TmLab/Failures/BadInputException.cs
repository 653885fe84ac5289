using System.Collections.Immutable;

namespace TmLab.Failures;

/// <summary>Input that cannot be used as it is (exit code 3). Carries every problem that was found, the first one first.</summary>
public sealed class BadInputException : TmLabException
{
    /// <summary>Reports one problem.</summary>
    public BadInputException(InputProblem problem, Exception? inner = null)
        : this([problem], inner)
    {
    }

    /// <summary>Reports one problem from its parts; see <see cref="InputProblem"/>.</summary>
    public BadInputException(string file, string? place, string found, string remedy, Exception? inner = null)
        : this(new InputProblem(file, place, found, remedy), inner)
    {
    }

    /// <summary>Reports several problems.</summary>
    public BadInputException(ImmutableArray<InputProblem> problems, Exception? inner = null)
        : base(string.Join(Environment.NewLine, problems.Select(p => p.ToString())), inner) => Problems = problems;

    /// <summary>The problems, at least one.</summary>
    public ImmutableArray<InputProblem> Problems { get; }
}
