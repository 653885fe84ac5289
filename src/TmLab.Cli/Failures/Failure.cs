using System.Collections.Immutable;
using TmLab.Cli.Output;
using TmLab.Failures;

namespace TmLab.Cli.Failures;

/// <summary>The one place where exceptions become lines for the user and an exit code.</summary>
internal sealed record Failure(ExitCode ExitCode, ImmutableArray<string> Lines, Exception Exception)
{
    /// <summary>Classifies what was thrown.</summary>
    public static Failure From(Exception exception) => Root(exception) switch
    {
        OperationCanceledException e => new(ExitCode.Interrupted, ["interrupted; no output was changed by the stage that was running"], e),
        BadInputException e => new(ExitCode.BadInput, [.. e.Problems.Select(p => p.ToString())], e),
        OutputException { Failure: OutputFailure.Exists } e when !Directory.Exists(e.File) =>
            new(ExitCode.Output, [$"{e.File}: already exists; give another name or --force"], e),
        OutputException e => new(ExitCode.Output, [OneLine(e.Message)], e),
        TmLabException e => new(ExitCode.Failed, [OneLine(e.Message)], e),
        OutOfMemoryException e => new(ExitCode.Failed, ["not enough memory; give a smaller --memory or use a larger machine"], e),
        { } e => new(ExitCode.Failed, InternalError(e), e),
    };

    /// <summary>Prints the lines, and the trace where it was asked for.</summary>
    public void Write(MessageChannel messages, bool withTrace)
    {
        Lines.ToList().ForEach(messages.Error);
        if (withTrace)
        {
            messages.Detail(Exception.ToString());
        }
    }

    /// <summary>Work on several threads wraps its failures: the first that has something to say to the user counts.</summary>
    private static Exception Root(Exception exception)
    {
        if (exception is not AggregateException aggregate)
        {
            return exception;
        }

        ImmutableArray<Exception> all = [.. aggregate.Flatten().InnerExceptions];
        return all.FirstOrDefault(e => e is TmLabException)
            ?? all.FirstOrDefault(e => e is not OperationCanceledException)
            ?? all.FirstOrDefault()
            ?? aggregate;
    }

    private static ImmutableArray<string> InternalError(Exception exception) =>
    [
        $"internal error: {exception.GetType().Name}: {OneLine(exception.Message)}",
        "this is a fault of the program; please report the command line, the line above, what --verbose adds, "
            + $"and the output of '{CommandLine.ProgramName} about'",
    ];

    private static string OneLine(string text) => string.Join(' ', text.Split(["\r\n", "\n", "\r"], StringSplitOptions.RemoveEmptyEntries));
}
