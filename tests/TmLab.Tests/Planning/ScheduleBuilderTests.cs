using CsCheck;
using TmLab.Measurement;
using TmLab.Planning;
using Xunit;

namespace TmLab.Tests.Planning;

public sealed class ScheduleBuilderTests
{
    [Fact]
    public void Frames_stand_in_the_order_described()
    {
        Schedule schedule = ScheduleBuilder.Build(new ScheduleSettings
        {
            PatternCount = 5, Steps = 3, TrackerEveryModes = 2, TrackerPattern = 1, DarkFrames = 2, ReferenceFrames = 1, BlankFrames = 1, FrameRateHz = 50,
        });
        string order = string.Concat(schedule.Frames.Select(f => f.Role.ToString()[0]));
        Assert.Equal("DDRB" + "TTTMMMMMM" + "TTTMMMMMM" + "TTTMMM" + "TTT", order);
        Assert.Equal([0, 1, 2, 3, 4], schedule.Modes.Select(g => g.Mode));
        Assert.All(schedule.Trackers, g => Assert.Equal(1, g.Mode));
        Assert.Equal(0.1, schedule.Frames[5].TimeS, 1e-12);
        Assert.Equal(2 * Math.PI / 3, schedule.Frames[5].PhaseRad, 1e-12);
    }

    [Fact]
    public void Every_schedule_holds_every_mode_at_every_step_once() =>
        Gen.Select(Gen.Int[1, 40], Gen.Int[1, 8], Gen.Int[0, 9]).Sample((patterns, steps, every) =>
        {
            Schedule schedule = ScheduleBuilder.Build(
                new ScheduleSettings { PatternCount = patterns, Steps = steps, TrackerEveryModes = every, TrackerPattern = patterns - 1 });
            int trackers = every == 0 ? 0 : ((patterns + every - 1) / every) + 1;
            return schedule.Frames.Where(f => f.Role == FrameRole.Mode).Select(f => (f.Mode, f.Step)).Distinct().Count() == patterns * steps
                && schedule.Trackers.Count() == trackers
                && schedule.Frames.Length == ((patterns + trackers) * steps) + 4
                && schedule.Frames.Select((f, i) => f.Index == i).All(same => same);
        });

    [Fact]
    public void Impossible_schedules_are_refused()
    {
        Assert.ThrowsAny<ArgumentException>(() => ScheduleBuilder.Build(new ScheduleSettings { PatternCount = 0 }));
        Assert.ThrowsAny<ArgumentException>(() => ScheduleBuilder.Build(new ScheduleSettings { PatternCount = 4, TrackerPattern = 4 }));
        Assert.ThrowsAny<ArgumentException>(() => ScheduleBuilder.Build(new ScheduleSettings { PatternCount = 4, FrameRateHz = double.NaN }));
    }
}
