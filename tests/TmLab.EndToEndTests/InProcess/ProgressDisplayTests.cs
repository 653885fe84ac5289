using TmLab.Cli.Output;
using TmLab.Quantities;
using Xunit;

namespace TmLab.EndToEndTests.InProcess;

public sealed class ProgressDisplayTests
{
    [Fact]
    public void A_line_says_share_amount_rate_and_time_left()
    {
        string line = ProgressDisplay.Describe(new StageProgress("reading frames", 1_095, 4_380, "frames"), TimeSpan.FromSeconds(3));

        Assert.Equal("reading frames: 25 %, 1,095 of 4,380 frames, 365 frames/s, 9.0 s left", line);
    }

    [Fact]
    public void Without_anything_done_there_is_no_rate() =>
        Assert.Equal(
            "reading frames: 0 %, 0 of 10 frames",
            ProgressDisplay.Describe(new StageProgress("reading frames", 0, 10, "frames"), TimeSpan.FromSeconds(3)));

    [Fact]
    public void Short_work_says_nothing_where_lines_stay()
    {
        (ProgressDisplay display, StringWriter text, ManualClock clock) = Make(isTerminal: false);
        for (int k = 0; k < 100; k++)
        {
            clock.Advance(TimeSpan.FromMilliseconds(49));
            display.Report(new StageProgress("working", k, 100, "rows"));
        }

        display.Dispose();
        Assert.Equal("", text.ToString());
    }

    [Fact]
    public void Long_work_says_a_plain_line_every_few_seconds()
    {
        (ProgressDisplay display, StringWriter text, ManualClock clock) = Make(isTerminal: false);
        for (int k = 1; k <= 200; k++)
        {
            clock.Advance(TimeSpan.FromMilliseconds(100));
            display.Report(new StageProgress("working", k, 200, "rows"));
        }

        string[] lines = text.ToString().Split('\n', StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries);
        Assert.Equal(3, lines.Length); // at 5, 10 and 15 s; at 20 s all is done, and the result says so
        Assert.Equal("working: 25 %, 50 of 200 rows, 10.2 rows/s, 14 s left", lines[0]);
        Assert.DoesNotContain('\u001b', text.ToString());
    }

    [Fact]
    public void On_a_terminal_one_line_is_redrawn_and_cleared_at_the_end_or_for_a_message()
    {
        (ProgressDisplay display, StringWriter text, ManualClock clock) = Make(isTerminal: true, out MessageChannel messages);
        for (int k = 1; k <= 3; k++)
        {
            clock.Advance(TimeSpan.FromMilliseconds(200));
            display.Report(new StageProgress("working", k, 4, "rows"));
        }

        messages.Warning("look here");
        display.Dispose();

        string[] drawn = text.ToString().Split("\r\u001b[K");
        Assert.Equal(5, drawn.Length);
        Assert.Equal("", drawn[0]);
        Assert.StartsWith("working: 75 %", drawn[3], StringComparison.Ordinal);
        Assert.Equal("warning: look here", drawn[4].TrimEnd());
    }

    [Fact]
    public void Each_activity_has_a_rate_of_its_own()
    {
        (ProgressDisplay display, StringWriter text, ManualClock clock) = Make(isTerminal: false);
        display.Report(new StageProgress("first", 0, 10, "rows"));
        clock.Advance(TimeSpan.FromSeconds(100));
        display.Report(new StageProgress("second", 0, 10, "rows"));
        clock.Advance(TimeSpan.FromSeconds(10));
        display.Report(new StageProgress("second", 5, 10, "rows"));

        Assert.Contains("second: 50 %, 5 of 10 rows, 0.5 rows/s, 10 s left", text.ToString(), StringComparison.Ordinal);
    }

    private static (ProgressDisplay Display, StringWriter Text, ManualClock Clock) Make(bool isTerminal) => Make(isTerminal, out _);

    private static (ProgressDisplay Display, StringWriter Text, ManualClock Clock) Make(bool isTerminal, out MessageChannel messages)
    {
        var text = new StringWriter();
        var clock = new ManualClock();
        messages = new MessageChannel(text, isTerminal);
        return (new ProgressDisplay(messages, clock), text, clock);
    }

    private sealed class ManualClock : TimeProvider
    {
        private long _ticks;

        public override long TimestampFrequency => TimeSpan.TicksPerSecond;

        public override long GetTimestamp() => _ticks;

        public void Advance(TimeSpan by) => _ticks += by.Ticks;
    }
}
