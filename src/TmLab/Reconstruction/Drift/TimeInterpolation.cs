namespace TmLab.Reconstruction.Drift;

/// <summary>Linear interpolation in time, held constant beyond the ends.</summary>
internal static class TimeInterpolation
{
    /// <summary>The value at a time.</summary>
    /// <param name="times">Rising times, at least one.</param>
    /// <param name="values">One value a time.</param>
    /// <param name="time">Where to interpolate.</param>
    public static double Linear(double[] times, double[] values, double time)
    {
        int found = Array.BinarySearch(times, time);
        if (found >= 0)
        {
            return values[found];
        }

        int above = ~found;
        if (above == 0 || above == times.Length)
        {
            return above == 0 ? values[0] : values[^1];
        }

        double share = (time - times[above - 1]) / (times[above] - times[above - 1]);
        return values[above - 1] + (share * (values[above] - values[above - 1]));
    }
}
