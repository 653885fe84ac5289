using System.Collections.Immutable;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;
using Xunit;

namespace TmLab.Tests.Measurement;

public sealed class ScheduleChecksTests
{
    private const int Modes = 4;
    private const int Steps = 4;

    private static readonly ModeDescription Basis =
        new(BasisKind.Hadamard, HadamardOrdering.Natural, Modes, new GridShape(2, 2), null, null);

    [Fact]
    public void Good_schedules_pass()
    {
        Assert.Empty(Check([.. Schedule.ModeMajor(Modes, Steps).Frames]));
        Assert.Empty(Check([.. Schedule.StepMajor(Modes, Steps).Frames]));
        Assert.Empty(Check(WithTrackers()));
    }

    [Fact]
    public void A_schedule_of_tracker_steps_spread_over_sweeps_passes()
    {
        List<ScheduledFrame> rows = [];
        for (int step = 0; step < Steps; step++)
        {
            rows.Add(Stepped(FrameRole.Tracker, 0, step));
            rows.AddRange(Enumerable.Range(0, Modes).Select(mode => Stepped(FrameRole.Mode, mode, step)));
        }

        Assert.Empty(Check(Numbered(rows)));
    }

    [Fact]
    public void Row_and_frame_counts_that_differ_are_both_named()
    {
        InputProblem problem = Assert.Single(ScheduleChecks.FrameCount(1096, 1095, "schedule.csv", "frames.tif"));
        Assert.Equal("schedule.csv: the schedule has 1096 rows, but frames.tif holds 1095 frames; write one row for each frame", problem.ToString());
        Assert.Empty(ScheduleChecks.FrameCount(5, 5, "s", "f"));
    }

    [Fact]
    public void A_duplicate_frame_is_named_with_its_line()
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames];
        rows[6] = rows[6] with { Index = 5 };
        Assert.Equal("s.csv, line 8: frame 5 appears a second time", First(rows));
    }

    [Fact]
    public void Unsorted_frames_are_named_with_the_line()
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames];
        (rows[6], rows[7]) = (rows[7], rows[6]);
        Assert.Equal("s.csv, line 8: frame 7 stands where frame 6 belongs", First(rows));
    }

    [Fact]
    public void A_step_missing_from_a_mode_is_named()
    {
        List<ScheduledFrame> rows = [.. Schedule.ModeMajor(Modes, Steps).Frames];
        rows.RemoveAt(6);
        Assert.Equal("s.csv, mode 1: step 2 is missing from mode 1", First(Numbered(rows)));
    }

    [Fact]
    public void A_mistyped_step_is_blamed_on_its_own_mode_alone()
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames];
        rows[6] = rows[6] with { Step = 9 };
        Assert.Equal(
            ["step 2 is missing from mode 1", "mode 1 has a step 9, which other modes lack"], Check(rows).Select(p => p.Found));
    }

    [Fact]
    public void A_step_missing_from_every_mode_is_a_gap()
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames.Select(f => f.Step == 3 ? f with { Step = 4 } : f)];
        Assert.Equal("s.csv, column step: the steps of the modes are 0, 1, 2, 4, not 0 … 3", First(rows));
    }

    [Fact]
    public void A_mode_out_of_range_is_named_with_its_line()
    {
        ScheduledFrame[] rows = [.. WithTrackers()];
        rows[0] = rows[0] with { Mode = 4 };
        Assert.Equal("s.csv, line 2: mode 4 lies outside 0 … 3", First(rows));
    }

    [Fact]
    public void A_mode_without_frames_is_named()
    {
        ScheduledFrame[] rows = Numbered([.. Schedule.ModeMajor(Modes, Steps).Frames.Where(f => f.Mode != 2)]);
        Assert.Equal("s.csv: 1 of 4 modes have no frames: 2", First(rows));
    }

    [Theory]
    [InlineData(4, 2)]
    [InlineData(3, 3)]
    public void Fewer_than_three_distinct_steps_modulo_two_pi_are_refused(int steps, int distinctWanted)
    {
        // Steps of π (or of 4π/3, which are three distinct ones): 0, π, 2π, 3π are two phases only.
        double stepRad = 2 * Math.PI * (steps == 4 ? 0.5 : 2 / 3.0);
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, steps).Frames.Select(f => f with { PhaseRad = stepRad * f.Step })];
        Assert.Equal(distinctWanted, StepChecks.DistinctPhases(rows.Take(steps).Select(r => r.PhaseRad)));
        ImmutableArray<InputProblem> problems = Check(rows);
        Assert.Equal(distinctWanted < 3 ? Modes : 0, problems.Length);
        Assert.All(problems, p => Assert.StartsWith("2 distinct phase steps", p.Found, StringComparison.Ordinal));
    }

    [Theory]
    [InlineData(new double[] { }, 0)]
    [InlineData(new[] { 0.0 }, 1)]
    [InlineData(new[] { 0.0, 6.2831853, 12.566370 }, 1)]
    [InlineData(new[] { 6.2830, 0.0005, 3.0 }, 2)]
    [InlineData(new[] { -1.5707963, 4.7123890, 1.0, 2.0 }, 3)]
    public void Phases_are_counted_modulo_two_pi(double[] phasesRad, int distinct) =>
        Assert.Equal(distinct, StepChecks.DistinctPhases(phasesRad));

    [Theory]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void A_phase_that_is_no_number_is_named_with_its_line(double phase)
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames];
        rows[2] = rows[2] with { PhaseRad = phase };
        Assert.Equal("s.csv, line 4: the phase of frame 2 is not a finite number", First(rows));
    }

    [Fact]
    public void Times_that_do_not_rise_are_named()
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames];
        rows[3] = rows[3] with { TimeS = 1.5 };
        Assert.Equal("s.csv, line 5: time 1.5 s does not lie after the 2 s of the row before", First(rows));
        rows[3] = rows[3] with { TimeS = double.NaN };
        Assert.Equal("s.csv, line 5: the time is not a finite number", First(rows));
    }

    [Fact]
    public void A_tracker_that_lacks_a_step_is_named_where_it_stands()
    {
        List<ScheduledFrame> rows = [.. WithTrackers()];

        // The second tracker stands behind the first one and two modes; its step 0 goes.
        rows.RemoveAt(Steps + (2 * Steps));
        InputProblem problem = Check(Numbered(rows))[0];
        Assert.Equal("frame 12", problem.Place);
        Assert.Equal("the tracker that starts at frame 12 (mode 0) has steps 1, 2, 3; the others have 0, 1, 2, 3", problem.Found);
    }

    [Fact]
    public void Many_problems_of_one_kind_are_counted_not_listed()
    {
        ScheduledFrame[] rows = [.. Schedule.ModeMajor(Modes, Steps).Frames.Select(f => f with { PhaseRad = double.NaN })];
        ImmutableArray<InputProblem> problems = Check(rows);
        Assert.Equal(ProblemList.ListedOfOneKind + 1, problems.Length);
        Assert.Equal("11 more problems of the same kind", problems[^1].Found);
    }

    private static ScheduledFrame[] WithTrackers()
    {
        List<ScheduledFrame> rows = [];
        for (int mode = 0; mode < Modes; mode++)
        {
            if (mode % 2 == 0)
            {
                rows.AddRange(Enumerable.Range(0, Steps).Select(s => Stepped(FrameRole.Tracker, 0, s)));
            }

            rows.AddRange(Enumerable.Range(0, Steps).Select(s => Stepped(FrameRole.Mode, mode, s)));
        }

        return Numbered(rows);
    }

    private static ScheduledFrame Stepped(FrameRole role, int mode, int step) => new(0, role, mode, step, Math.PI / 2 * step, 0);

    private static ScheduledFrame[] Numbered(List<ScheduledFrame> rows) => [.. rows.Select((r, i) => r with { Index = i, TimeS = i })];

    private static ImmutableArray<InputProblem> Check(ScheduledFrame[] rows) => ScheduleChecks.Check([.. rows], Basis, "s.csv");

    private static string First(ScheduledFrame[] rows)
    {
        InputProblem first = Check(rows)[0];
        return (first with { Remedy = "" }).ToString().TrimEnd(' ', ';');
    }
}
