namespace TmLab.Simulation;

/// <summary>
/// Logarithm, exponential, sine and cosine from additions, multiplications, divisions and square roots alone. IEEE 754 fixes
/// those to the last bit and the runtime never fuses them by itself, so simulated frames are the same bytes on every machine;
/// the system's own functions differ in the last digits from one mathematics library to the next. Relative accuracy about 1e-15
/// (tested against <see cref="Math"/>).
/// </summary>
internal static class PortableMath
{
    private const double Ln2High = 0.6931471803691238;
    private const double Ln2Low = 1.9082149292705877e-10;
    private const double Sqrt2 = 1.4142135623730951;

    /// <summary>ln x for normal positive x: x = 2^e m with m in [1/√2, √2), ln m = 2 artanh((m − 1)/(m + 1)).</summary>
    public static double Log(double x)
    {
        long bits = BitConverter.DoubleToInt64Bits(x);
        int exponent = (int)(bits >> 52) - 1023;
        double mantissa = BitConverter.Int64BitsToDouble((bits & 0x000F_FFFF_FFFF_FFFF) | 0x3FF0_0000_0000_0000);
        if (mantissa > Sqrt2)
        {
            mantissa *= 0.5;
            exponent++;
        }

        double s = (mantissa - 1) / (mantissa + 1);
        double q = s * s;
        double series = 1.0 / 19;
        series = (series * q) + (1.0 / 17);
        series = (series * q) + (1.0 / 15);
        series = (series * q) + (1.0 / 13);
        series = (series * q) + (1.0 / 11);
        series = (series * q) + (1.0 / 9);
        series = (series * q) + (1.0 / 7);
        series = (series * q) + (1.0 / 5);
        series = (series * q) + (1.0 / 3);
        return (exponent * Ln2High) + ((exponent * Ln2Low) + (2 * s * ((series * q) + 1)));
    }

    /// <summary>e^x for |x| ≤ 700: x = k ln 2 + r with |r| ≤ ln 2 / 2, Taylor series in r.</summary>
    public static double Exp(double x)
    {
        double k = Math.Round(x * 1.4426950408889634);
        double r = (x - (k * Ln2High)) - (k * Ln2Low);
        double sum = 1;
        for (int n = 14; n >= 1; n--)
        {
            sum = 1 + (r * sum / n);
        }

        return sum * BitConverter.Int64BitsToDouble(((long)k + 1023) << 52);
    }

    /// <summary>sin and cos of 2π t. The nearest quarter turn is taken off exactly, Taylor series within ±π/4.</summary>
    /// <param name="turns">The angle in turns, |t| below 2^40.</param>
    public static (double Sin, double Cos) SinCosTurns(double turns)
    {
        (double a, int quarter) = ReduceToQuarter(turns);
        double q = a * a;
        double sin = a * SineOverAngle(q);
        double cos = Cosine(q);
        return quarter switch
        {
            0 => (sin, cos),
            1 => (cos, -sin),
            2 => (-sin, -cos),
            _ => (-cos, sin),
        };
    }

    /// <summary>cos of 2π t alone; the same value as <see cref="SinCosTurns"/> gives.</summary>
    public static double CosTurns(double turns)
    {
        (double a, int quarter) = ReduceToQuarter(turns);
        double magnitude = (quarter & 1) == 0 ? Cosine(a * a) : a * SineOverAngle(a * a);
        return quarter is 1 or 2 ? -magnitude : magnitude;
    }

    /// <summary>sin and cos of an angle in radians, |angle| below 1e6.</summary>
    public static (double Sin, double Cos) SinCos(double angleRad) => SinCosTurns(angleRad / (2 * Math.PI));

    private static (double AngleRad, int Quarter) ReduceToQuarter(double turns)
    {
        double fraction = turns - Math.Floor(turns);
        double quarter = Math.Floor((fraction * 4) + 0.5);
        return ((fraction - (quarter * 0.25)) * (2 * Math.PI), (int)quarter & 3);
    }

    /// <summary>sin a / a from q = a², Taylor series to a¹⁴; each factor is 1 / (n (n − 1)).</summary>
    private static double SineOverAngle(double q)
    {
        double sum = 1 - (q * (1.0 / 210));
        sum = 1 - (q * sum * (1.0 / 156));
        sum = 1 - (q * sum * (1.0 / 110));
        sum = 1 - (q * sum * (1.0 / 72));
        sum = 1 - (q * sum * (1.0 / 42));
        sum = 1 - (q * sum * (1.0 / 20));
        return 1 - (q * sum * (1.0 / 6));
    }

    /// <summary>cos a from q = a², Taylor series to a¹⁶.</summary>
    private static double Cosine(double q)
    {
        double sum = 1 - (q * (1.0 / 240));
        sum = 1 - (q * sum * (1.0 / 182));
        sum = 1 - (q * sum * (1.0 / 132));
        sum = 1 - (q * sum * (1.0 / 90));
        sum = 1 - (q * sum * (1.0 / 56));
        sum = 1 - (q * sum * (1.0 / 30));
        sum = 1 - (q * sum * (1.0 / 12));
        return 1 - (q * sum * (1.0 / 2));
    }
}
