using System.Globalization;

namespace TmLab.Cli.Output;

/// <summary>Durations for people.</summary>
internal static class Duration
{
    /// <summary><c>0.42 s</c>, <c>38 s</c>, <c>4 min 10 s</c> or <c>3 h 05 min</c>.</summary>
    public static string Describe(TimeSpan time) => time.TotalSeconds switch
    {
        < 10 => string.Create(CultureInfo.InvariantCulture, $"{time.TotalSeconds:0.0#} s"),
        < 60 => string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(time.TotalSeconds):0} s"),
        < 3600 => string.Create(CultureInfo.InvariantCulture, $"{time.Minutes} min {time.Seconds:00} s"),
        _ => string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(time.TotalHours):0} h {time.Minutes:00} min"),
    };
}
