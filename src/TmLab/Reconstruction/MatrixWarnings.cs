using System.Globalization;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Reconstruction;

/// <summary>What a careful user should know of a matrix, one sentence each.</summary>
internal static class MatrixWarnings
{
    private const int MostFindings = 10;

    /// <summary>All of it, the gravest first.</summary>
    public static IEnumerable<string> For(
        MeasurementFacts facts, DriftFacts drift, PixelJudgement pixels, MatrixQuality quality, bool noiseUnknown, bool dependentPatterns, ReconstructionSettings settings) =>
        [.. OfFrames(quality), .. OfDrift(facts, drift, settings), .. OfPixels(pixels), .. OfModes(quality, dependentPatterns), .. OfNoise(noiseUnknown)];

    private static IEnumerable<string> OfFrames(MatrixQuality quality)
    {
        foreach (FrameFinding finding in quality.Frames.Take(MostFindings))
        {
            yield return finding.Sentence;
        }

        if (quality.Frames.Length > MostFindings)
        {
            yield return Invariant($"{quality.Frames.Length - MostFindings} more findings on frames stand in the file under /quality.");
        }

        if (!quality.LostPatterns.IsEmpty)
        {
            yield return Invariant(
                $"{Counted(quality.LostPatterns.Length, "pattern has", "patterns have")} no usable showing: record {(quality.LostPatterns.Length == 1 ? "it" : "them")} again.");
        }
    }

    private static IEnumerable<string> OfDrift(MeasurementFacts facts, DriftFacts drift, ReconstructionSettings settings)
    {
        if (drift.TrackerTimeS.Length < 2)
        {
            yield return (drift.Method == DriftMethod.SmoothedPath
                ? "There are no trackers: the phase drift inside every mode was removed, but what drifted from one mode to the next is still in the matrix. "
                : "There are no trackers to follow the phase drift: what drift there was is still in the matrix. ")
                + "Show one pattern again every few modes, with the role tracker.";
        }

        for (int k = 1; k < drift.TrackerPhaseRad.Length; k++)
        {
            double gap = Math.Abs(drift.TrackerPhaseRad[k] - drift.TrackerPhaseRad[k - 1]);
            if (drift.AmbiguousGaps.Contains(k - 1))
            {
                yield return Invariant(
                    $"From the tracker at {drift.TrackerTimeS[k - 1]:F2} s to that at {drift.TrackerTimeS[k]:F2} s the phase may have moved by more than π: it was unwrapped to {gap:F2} rad, which may be wrong by 2π. Show trackers more often.");
            }
            else if (gap > settings.TrackerGapWarningRad)
            {
                yield return Invariant(
                    $"The phase moved by {gap:F2} rad from the tracker at {drift.TrackerTimeS[k - 1]:F2} s to that at {drift.TrackerTimeS[k]:F2} s: near π it cannot be unwrapped. Show trackers more often.");
            }
        }

        if (!double.IsNaN(drift.Decorrelation.TimeConstantS))
        {
            double lasted = facts.Schedule.Frames[^1].TimeS - facts.Schedule.Frames[0].TimeS;
            yield return Invariant(
                $"The sample changed: the correlation of its field falls to 1/e in {drift.Decorrelation.TimeConstantS:G3} s, and the measurement took {lasted:G3} s. A focus loses {100 * (1 - drift.Decorrelation.EnhancementFactor):F1} % of its enhancement. Measure faster or fewer modes.");
        }
    }

    private static IEnumerable<string> OfPixels(PixelJudgement pixels)
    {
        foreach ((PixelReason reason, string one, string many) in Words)
        {
            int count = pixels.Reason.Count(r => r == reason);
            if (count > 0)
            {
                yield return Invariant($"{Counted(count, "pixel " + one, "pixels " + many)}: marked invalid.");
            }
        }

        if (!pixels.Valid.Any(v => v))
        {
            yield return "No pixel is valid: every one is saturated, shows no modulation or has too little reference.";
        }
    }

    private static readonly (PixelReason Reason, string One, string Many)[] Words =
    [
        (PixelReason.Saturated, "is saturated", "are saturated"),
        (PixelReason.Hot, "is hot", "are hot"),
        (PixelReason.Dead, "is dead", "are dead"),
        (PixelReason.LittleReference, "has too little reference", "have too little reference"),
        (PixelReason.LowVisibility, "has hardly any fringes", "have hardly any fringes"),
    ];

    private static IEnumerable<string> OfModes(MatrixQuality quality, bool dependentPatterns)
    {
        if (dependentPatterns)
        {
            yield return "The custom patterns are nearly dependent: what they do not tell apart is missing from the matrix. Choose patterns that span all modes.";
        }

        if (!quality.OutlyingModes.IsEmpty)
        {
            string listed = string.Join(", ", quality.OutlyingModes.Take(MostFindings));
            yield return Invariant(
                $"{Counted(quality.OutlyingModes.Length, "column", "columns")} ({listed}) {(quality.OutlyingModes.Length == 1 ? "has" : "have")} far more energy than the others: light reaches the camera that the modulator does not modulate. Block it, or leave these columns out.");
        }
    }

    private static IEnumerable<string> OfNoise(bool unknown)
    {
        if (unknown)
        {
            yield return "With three steps the noise cannot be measured, and camera.electrons_per_count is not given: noise is not known.";
        }
    }

    private static string Counted(int count, string one, string many) => Invariant($"{count} {(count == 1 ? one : many)}");

    private static string Invariant(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
