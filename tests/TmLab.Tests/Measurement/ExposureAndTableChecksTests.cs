using TmLab.Measurement;
using Xunit;

namespace TmLab.Tests.Measurement;

public sealed class ExposureAndTableChecksTests
{
    private static readonly Schedule Frames = new(
        [
            .. Enumerable.Range(0, 3).Select(i => new ScheduledFrame(i, FrameRole.Dark, -1, -1, double.NaN, i)),
            .. Enumerable.Range(3, 9).Select(i => new ScheduledFrame(i, FrameRole.Mode, (i - 3) / 3, i % 3, i % 3, i)),
        ],
        timesAreMeasured: false);

    [Theory]
    [InlineData(40, 600, 0.0, null)]
    [InlineData(40, 41, 0.0, null)]
    [InlineData(40, 40, 0.0, "no light above the dark level")]
    [InlineData(40, 30, 0.0, "no light above the dark level")]
    [InlineData(0, 0, 0.0, "the frames are all dark")]
    [InlineData(40, 4095, 0.995, "the frames are saturated")]
    [InlineData(40, 4000, 0.9, null)]
    public void Only_hopeless_exposures_are_refused(double darkMean, double steppedMean, double saturated, string? complaint)
    {
        // The spread of frame means is ± 0.1 counts, so that one count above the dark level is 4 standard errors and more.
        FrameFacts[] facts = [.. Frames.Frames.Select(f => new FrameFacts(
            (float)(f.Role == FrameRole.Dark ? darkMean : steppedMean) + (steppedMean == 0 ? 0 : 0.1f * ((f.Index % 3) - 1)),
            f.Role == FrameRole.Dark ? 0 : (float)saturated,
            (uint)f.Index))];
        var problems = ExposureChecks.Check(facts, Frames, "frames.tif");
        Assert.Equal(complaint is null ? 0 : 1, problems.Length);
        Assert.All(problems, p => Assert.Contains(complaint!, p.ToString(), StringComparison.Ordinal));
    }

    [Theory]
    [InlineData(new[] { 0, 255 }, new[] { 0.0, 6.2 }, null)]
    [InlineData(new[] { 0 }, new[] { 0.0 }, "the table has 1 rows")]
    [InlineData(new[] { 0, 256 }, new[] { 0.0, 1 }, "grey level 256 lies outside 0 … 255")]
    [InlineData(new[] { 0, 0 }, new[] { 0.0, 1 }, "grey level 0 does not rise above 0")]
    [InlineData(new[] { 0, 9, 20 }, new[] { 0.0, 1, 0.5 }, "phase 0.5 rad does not rise above 1 rad of the row before: the table is not monotone")]
    [InlineData(new[] { 0, 9 }, new[] { 0.0, double.NaN }, "the phase is not a finite number")]
    public void A_grey_to_phase_table_must_rise(int[] gray, double[] phaseRad, string? complaint)
    {
        var table = new GrayPhaseTable([.. gray], [.. phaseRad]);
        var problems = GrayPhaseChecks.Check(table, "lut.csv");
        Assert.Equal(complaint is null ? 0 : 1, problems.Length);
        Assert.All(problems, p => Assert.StartsWith(complaint!, p.Found, StringComparison.Ordinal));
    }
}
