using System.Globalization;
using TmLab.Quantities;

namespace TmLab.Cli.Output;

/// <summary>
/// Shows how far a stage has come, with its rate and the time left. On a terminal one line is redrawn; otherwise a plain line
/// appears every few seconds, and none at all for short work.
/// </summary>
internal sealed class ProgressDisplay(MessageChannel messages, TimeProvider clock) : IProgress<StageProgress>, IDisposable
{
    /// <summary>Time between two lines where lines stay.</summary>
    public static readonly TimeSpan PlainInterval = TimeSpan.FromSeconds(5);

    /// <summary>Time between two redrawings on a terminal.</summary>
    public static readonly TimeSpan RedrawInterval = TimeSpan.FromMilliseconds(100);

    /// <summary>A rate from less time than this says nothing.</summary>
    private static readonly TimeSpan ShortestForRate = TimeSpan.FromMilliseconds(300);

    private readonly Lock _lock = new();
    private readonly TimeSpan _interval = messages.IsTerminal ? RedrawInterval : PlainInterval;
    private long _lastShown = clock.GetTimestamp();
    private long _activityStart = clock.GetTimestamp();
    private string _activity = "";

    /// <summary>Takes a report; may be called from several threads, and in any number.</summary>
    public void Report(StageProgress value)
    {
        lock (_lock)
        {
            NoticeActivity(value.Activity);
            bool lasts = !messages.IsTerminal;
            if (clock.GetElapsedTime(_lastShown) < _interval || (lasts && value.Done >= value.Total))
            {
                return;
            }

            _lastShown = clock.GetTimestamp();
            Show(Describe(value, clock.GetElapsedTime(_activityStart)));
        }
    }

    public void Dispose() => messages.ClearTransient();

    /// <summary>One line: activity, share, amount, rate, time left; the last two once there is something to tell them from.</summary>
    public static string Describe(StageProgress value, TimeSpan elapsed)
    {
        double share = value.Total > 0 ? Math.Clamp((double)value.Done / value.Total, 0, 1) : 0;
        string line = string.Create(
            CultureInfo.InvariantCulture, $"{value.Activity}: {Math.Floor(100 * share):0} %, {value.Done:N0} of {value.Total:N0} {value.Unit}");
        if (value.Done <= 0 || elapsed < ShortestForRate)
        {
            return line;
        }

        double rate = value.Done / elapsed.TotalSeconds;
        var left = TimeSpan.FromSeconds(Math.Max(0, value.Total - value.Done) / rate);
        return string.Create(CultureInfo.InvariantCulture, $"{line}, {Rate(rate)} {value.Unit}/s, {Duration.Describe(left)} left");
    }

    private static string Rate(double rate) =>
        rate >= 100 ? rate.ToString("N0", CultureInfo.InvariantCulture) : rate.ToString("0.##", CultureInfo.InvariantCulture);

    private void NoticeActivity(string activity)
    {
        if (activity != _activity)
        {
            _activity = activity;
            _activityStart = clock.GetTimestamp();
        }
    }

    private void Show(string line)
    {
        if (messages.IsTerminal)
        {
            messages.ShowTransient(line);
        }
        else
        {
            messages.Detail(line);
        }
    }
}
