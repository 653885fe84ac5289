using System.Collections.Immutable;
using CsCheck;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Storage.Manifest;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Manifest;

public sealed class ScheduleCsvTests : IDisposable
{
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Any_schedule_written_and_read_is_the_same()
    {
        Gen<ScheduledFrame> frames = Gen.Select(Gen.Enum<FrameRole>(), Gen.Int[0, 99], Gen.Int[0, 9], Gen.Double[-10, 10], Gen.Double[0, 1e6]).Select(
            (role, mode, step, phase, time) => role is FrameRole.Mode or FrameRole.Tracker
                ? new ScheduledFrame(0, role, mode, step, phase, time)
                : new ScheduledFrame(0, role, -1, -1, double.NaN, time));
        Gen.Select(frames.Array[0, 20], Gen.Bool).Sample((rows, timed) =>
        {
            ImmutableArray<ScheduledFrame> numbered = [.. rows.Select((r, i) => r with { Index = i, TimeS = timed ? r.TimeS : i })];
            (ImmutableArray<ScheduledFrame> read, bool hasTimes) = Read(ScheduleCsv.Write(new Schedule(numbered, timed)));
            Assert.Equal(numbered.AsEnumerable(), read);
            Assert.Equal(timed, hasTimes);
        });
    }

    [Fact]
    public void Columns_are_found_by_name_in_any_order_with_any_line_ends()
    {
        (ImmutableArray<ScheduledFrame> rows, bool hasTimes) = Read("role, phase_rad, step, mode ,frame\r\n\"mode\",1.5,2,7,0\r\ndark,,,,1\r\n\r\n");
        Assert.False(hasTimes);
        Assert.Equal(new ScheduledFrame(0, FrameRole.Mode, 7, 2, 1.5, 0), rows[0]);
        Assert.Equal(FrameRole.Dark, rows[1].Role);
    }

    [Theory]
    [InlineData("frame;role;mode;step;phase_rad\n0;mode;0;0;0,5\n", "line 1: the columns are separated by semicolons")]
    [InlineData("frame\trole\tmode\tstep\tphase_rad\n", "line 1: the columns are separated by tabs")]
    [InlineData("frame,role,mode,step,phase_rad\n0,mode,0,0,0,5\n", "line 2: the row has 6 fields, the header 5; write numbers with decimal points, not commas")]
    [InlineData("frame,role,mode,step,phase_rad\n0,mode,0,0,\"0,5\"\n", "line 2, column phase_rad: \"0,5\" is not a number")]
    [InlineData("frame,role,mode,step,phase_rad\n0,mode,0,0,0\n\n1,mode,0,1,1\n", "line 3: an empty line stands between rows")]
    [InlineData("frame,role,mode,step,phase\n", "line 1: unknown column \"phase\"; did you mean \"phase_rad\"?")]
    [InlineData("frame,role,mode,phase_rad\n", "line 1: the column \"step\" is missing")]
    [InlineData("frame,role,mode,step,phase_rad,step\n", "line 1: the column \"step\" appears twice")]
    [InlineData("frame,role,mode,step,phase_rad\n0,moed,0,0,0\n", "line 2, column role: unknown role \"moed\"; write one of mode, tracker, dark, reference, blank")]
    [InlineData("frame,role,mode,step,phase_rad\n0,mode,x,0,0\n", "line 2, column mode: \"x\" is not a whole number")]
    [InlineData("frame,role,mode,step,phase_rad\n0,mode,0,0,\n", "line 2, column phase_rad: \"\" is not a number")]
    [InlineData("", "line 1: the file has no header")]
    public void A_bad_table_is_named_with_its_line(string text, string expected)
    {
        ProblemList problems = Problems(text);
        Assert.Contains(expected, problems.ToImmutable()[0].ToString(), StringComparison.Ordinal);
        Assert.StartsWith("schedule.csv, ", problems.ToImmutable()[0].ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public void A_file_wrong_throughout_lists_a_few_rows_and_counts_the_others()
    {
        string text = "frame,role,mode,step,phase_rad\n" + string.Concat(Enumerable.Repeat("0,nix,0,0,0\n", 100));
        ImmutableArray<InputProblem> problems = Problems(text).ToImmutable();
        Assert.Equal(ProblemList.ListedOfOneKind + 1, problems.Length);
        Assert.Contains("95 more problems", problems[^1].Found, StringComparison.Ordinal);
    }

    private static (ImmutableArray<ScheduledFrame> Rows, bool HasTimes) Read(string text)
    {
        // A folder of its own for each call: properties are sampled on several threads.
        using var folder = new TemporaryFolder();
        var problems = new ProblemList("schedule.csv");
        var read = ScheduleCsv.Read(folder.Write("schedule.csv", text), problems);
        problems.ThrowIfAny();
        return read!.Value;
    }

    private ProblemList Problems(string text)
    {
        var problems = new ProblemList("schedule.csv");
        Assert.Null(ScheduleCsv.Read(_folder.Write("schedule.csv", text), problems));
        return problems;
    }
}
