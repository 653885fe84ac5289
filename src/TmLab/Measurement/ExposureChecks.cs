using System.Collections.Immutable;
using TmLab.Failures;

namespace TmLab.Measurement;

/// <summary>Checks that the stepped frames hold light, are not saturated and change at all.</summary>
public static class ExposureChecks
{
    /// <summary>From this share of pixels at full scale on, a frame counts as wholly saturated (a few dead pixels never saturate).</summary>
    public const double WhollySaturatedFraction = 0.99;

    /// <summary>How many standard errors above the dark frames the stepped frames' mean must lie.</summary>
    public const double DarkStandardErrors = 4;

    /// <summary>Refuses measurements that no reconstruction can help.</summary>
    /// <param name="facts">One entry a frame.</param>
    /// <param name="schedule">The frames' roles.</param>
    /// <param name="file">The frames' file for messages.</param>
    public static ImmutableArray<InputProblem> Check(IReadOnlyList<FrameFacts> facts, Schedule schedule, string file)
    {
        FrameFacts[] stepped = [.. schedule.Frames.Where(f => f.IsStepped).Select(f => facts[f.Index])];
        if (stepped.Length == 0)
        {
            return [];
        }

        double[] dark = [.. schedule.FramesWith(FrameRole.Dark).Select(f => (double)facts[f].MeanCount)];
        var problems = new ProblemList(file);
        if (IsDark([.. stepped.Select(f => (double)f.MeanCount)], dark, out string found))
        {
            problems.Add("all mode and tracker frames", found, "check that the shutter was open and the exposure long enough");
        }
        else if (stepped.All(f => f.SaturatedFraction >= WhollySaturatedFraction))
        {
            problems.Add("all mode and tracker frames", "every pixel is at full scale: the frames are saturated", "lower the exposure or the laser power");
        }
        else if (stepped.Length > 1 && stepped.All(f => f.Crc32 == stepped[0].Crc32))
        {
            problems.Add("all mode and tracker frames", "they hold the same counts, pixel for pixel: the camera did not deliver new frames", "check the camera's trigger");
        }

        return problems.ToImmutable();
    }

    /// <summary>
    /// Dark when all counts are zero, or when the mean over the stepped frames lies within <see cref="DarkStandardErrors"/> standard
    /// errors of the mean over two or more dark frames (spread taken from the frame means of both kinds).
    /// </summary>
    private static bool IsDark(double[] stepped, double[] dark, out string found)
    {
        found = "every count is zero: the frames are all dark";
        if (stepped.All(m => m == 0))
        {
            return true;
        }

        if (dark.Length < 2)
        {
            return false;
        }

        double excess = stepped.Average() - dark.Average();
        double standardError = Math.Sqrt(SquaredErrorOfMean(stepped) + SquaredErrorOfMean(dark));
        found = FormattableString.Invariant(
            $"their mean is {stepped.Average():0.###} counts, the dark frames' {dark.Average():0.###}: no light above the dark level");
        return excess <= DarkStandardErrors * standardError;
    }

    private static double SquaredErrorOfMean(double[] values)
    {
        double mean = values.Average();
        return values.Sum(v => (v - mean) * (v - mean)) / Math.Max(1, values.Length - 1) / values.Length;
    }
}
