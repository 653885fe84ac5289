using TmLab.EndToEndTests.Running;
using TmLab.Failures;
using Xunit;

namespace TmLab.EndToEndTests.InProcess;

public sealed class FailureTests
{
    public static TheoryData<string, int, string> Cases => new()
    {
        { "bad input", 3, "tmlab: m.h5, /frames/counts: has rank 2; write frames as (frame, y, x)\ntmlab: schedule.csv, row 4: no phase; give one\n" },
        { "numerical", 1, "tmlab: the decomposition did not converge; try --engine managed\n" },
        { "exists", 5, "tmlab: t.h5: already exists; give another name or --force\n" },
        { "disk full", 5, "tmlab: t.h5: the disk is full; make room\n" },
        { "cancelled", 130, "tmlab: interrupted; no output was changed by the stage that was running\n" },
        { "memory", 1, "tmlab: not enough memory; give a smaller --memory or use a larger machine\n" },
        { "threads", 3, "tmlab: m.h5: damaged; record again\n" },
    };

    [Theory]
    [MemberData(nameof(Cases))]
    public void A_failure_becomes_its_lines_and_its_exit_code(string kind, int code, string lines)
    {
        ToolResult result = InProcessTool.Run(new FakeStages(() => Make(kind)), "reconstruct", "m.h5", "-o", "t.h5");

        Assert.Equal(code, result.ExitCode);
        Assert.Equal("", result.Stdout);
        Assert.Equal(lines, result.Stderr.ReplaceLineEndings("\n"));
    }

    [Fact]
    public void A_fault_of_the_program_says_so_and_what_to_report()
    {
        var stages = new FakeStages(() => new InvalidOperationException("two\nlines"));
        ToolResult result = InProcessTool.Run(stages, "reconstruct", "m.h5", "-o", "t.h5");

        Assert.Equal(1, result.ExitCode);
        Assert.Equal("tmlab: internal error: InvalidOperationException: two lines", result.ErrorLines[0]);
        Assert.Contains("please report", result.ErrorLines[1], StringComparison.Ordinal);
        Assert.Equal(2, result.ErrorLines.Count);
    }

    [Fact]
    public void Verbose_adds_the_trace()
    {
        var stages = new FakeStages(() => new NumericalException("it failed", "do otherwise"));
        ToolResult result = InProcessTool.Run(stages, "reconstruct", "m.h5", "-o", "t.h5", "--verbose");

        Assert.Equal("tmlab: it failed; do otherwise", result.ErrorLines[0]);
        Assert.Contains(result.ErrorLines, l => l.StartsWith("at ", StringComparison.Ordinal) && l.Contains(nameof(FakeStages), StringComparison.Ordinal));
    }

    private static Exception Make(string kind) => kind switch
    {
        "bad input" => new BadInputException(
        [
            new InputProblem("m.h5", "/frames/counts", "has rank 2", "write frames as (frame, y, x)"),
            new InputProblem("schedule.csv", "row 4", "no phase", "give one"),
        ]),
        "numerical" => new NumericalException("the decomposition did not converge", "try --engine managed"),
        "exists" => new OutputException("t.h5", OutputFailure.Exists, "name another file or give --force"),
        "disk full" => new OutputException("t.h5", OutputFailure.DiskFull, "make room"),
        "cancelled" => new OperationCanceledException(),
        "memory" => new InsufficientMemoryException(),
        "threads" => new AggregateException(
            new OperationCanceledException(),
            new AggregateException(new IOException("late"), new BadInputException("m.h5", null, "damaged", "record again"))),
        _ => throw new ArgumentException(kind),
    };
}
