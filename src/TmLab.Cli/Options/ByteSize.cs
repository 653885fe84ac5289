using System.Globalization;

namespace TmLab.Cli.Options;

/// <summary>Sizes of memory as people write them: <c>2GiB</c>, <c>512 MB</c>, <c>1.5g</c>.</summary>
internal static class ByteSize
{
    /// <summary>Below this no stage can hold even one block.</summary>
    public const long SmallestWorkingMemory = 16 << 20;

    private const double Largest = 1L << 50;

    /// <summary>Powers of 1024 with an i (and for the bare letter), powers of 1000 without (IEC 80000-13).</summary>
    private static readonly (string Suffix, long Factor)[] Units =
    [
        ("kib", 1L << 10), ("mib", 1L << 20), ("gib", 1L << 30), ("tib", 1L << 40),
        ("kb", 1_000), ("mb", 1_000_000), ("gb", 1_000_000_000), ("tb", 1_000_000_000_000),
        ("k", 1L << 10), ("m", 1L << 20), ("g", 1L << 30), ("t", 1L << 40),
        ("b", 1),
    ];

    /// <summary>Reads a size with its unit. A bare number is refused: nobody knows whether it means bytes or megabytes.</summary>
    public static bool TryParse(string text, out long bytes)
    {
        bytes = 0;
        string lower = text.Trim().ToLowerInvariant();
        (string suffix, long factor) = Units.FirstOrDefault(u => lower.EndsWith(u.Suffix, StringComparison.Ordinal));
        if (suffix is null)
        {
            return false;
        }

        string number = lower[..^suffix.Length].TrimEnd();
        if (!double.TryParse(number, NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out double value))
        {
            return false;
        }

        double size = value * factor;
        if (!(size >= SmallestWorkingMemory && size <= Largest))
        {
            return false;
        }

        bytes = (long)size;
        return true;
    }

    /// <summary>A size in the largest unit of 1024 that leaves at least one, with three significant digits.</summary>
    public static string Format(long bytes)
    {
        string[] names = ["B", "KiB", "MiB", "GiB", "TiB"];
        double value = bytes;
        int at = 0;
        while (value >= 1024 && at < names.Length - 1)
        {
            value /= 1024;
            at++;
        }

        return string.Create(CultureInfo.InvariantCulture, $"{value:0.##} {names[at]}");
    }
}
