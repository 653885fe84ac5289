using System.Diagnostics.CodeAnalysis;
using System.Globalization;
using System.Runtime.CompilerServices;

namespace TmLab.Numerics;

/// <summary>The one place where wrong calls become argument exceptions. Failed numerics are outcomes, not exceptions from here.</summary>
public static class Preconditions
{
    /// <summary>Requires <paramref name="value"/> to lie in [<paramref name="minimum"/>, <paramref name="maximum"/>].</summary>
    /// <exception cref="ArgumentOutOfRangeException">The value lies outside.</exception>
    public static void InRange(
        long value, long minimum, long maximum, [CallerArgumentExpression(nameof(value))] string name = "")
    {
        if (value < minimum || value > maximum)
        {
            ThrowOutOfRange(name, value, minimum, maximum);
        }
    }

    /// <summary>Requires <paramref name="value"/> to lie in [<paramref name="minimum"/>, <paramref name="maximum"/>]; NaN does not.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The value lies outside or is NaN.</exception>
    public static void InRange(
        double value, double minimum, double maximum, [CallerArgumentExpression(nameof(value))] string name = "")
    {
        if (!(value >= minimum && value <= maximum))
        {
            ThrowOutOfRange(name, value, minimum, maximum);
        }
    }

    /// <summary>Requires two lengths to agree.</summary>
    /// <exception cref="ArgumentException">The lengths differ.</exception>
    public static void SameLength(long found, long needed, [CallerArgumentExpression(nameof(found))] string name = "")
    {
        if (found != needed)
        {
            ThrowLength(name, found, needed);
        }
    }

    /// <summary>Requires a buffer to hold at least <paramref name="needed"/> elements.</summary>
    /// <exception cref="ArgumentException">The buffer is shorter.</exception>
    public static void AtLeast(long found, long needed, [CallerArgumentExpression(nameof(found))] string name = "")
    {
        if (found < needed)
        {
            ThrowLength(name, found, needed);
        }
    }

    /// <summary>Requires a condition that the caller can see to hold.</summary>
    /// <exception cref="ArgumentException">The condition does not hold.</exception>
    public static void Require([DoesNotReturnIf(false)] bool condition, string message)
    {
        if (!condition)
        {
            throw new ArgumentException(message);
        }
    }

    [DoesNotReturn]
    private static void ThrowOutOfRange<T>(string name, T value, T minimum, T maximum)
        where T : IFormattable =>
        throw new ArgumentOutOfRangeException(
            name, string.Create(CultureInfo.InvariantCulture, $"{name} is {value}; it must lie in [{minimum}, {maximum}]."));

    [DoesNotReturn]
    private static void ThrowLength(string name, long found, long needed) =>
        throw new ArgumentException(
            string.Create(CultureInfo.InvariantCulture, $"{name} is {found}, needed {needed}."), name);
}
