using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Reconstruction;

/// <summary>Which rows may be used, why others may not, and the factor that each is multiplied by.</summary>
/// <param name="Reason">One entry a pixel.</param>
/// <param name="RowScale">1/√(reference intensity), or 1 where that is not known.</param>
/// <param name="Normalised">Whether the reference intensity was known.</param>
internal sealed record PixelJudgement(ImmutableArray<PixelReason> Reason, float[] RowScale, bool Normalised)
{
    // A pixel in the dark at this share of full scale, or at full scale in this share of the frames, is not lit but broken.
    private const double HotDarkShare = 0.9;
    private const double HotFrameShare = 0.98;

    // A pixel with this share of its fellows' median light or visibility is blind.
    private const double DeadLightShare = 0.02;
    private const double LowVisibilityShare = 0.1;

    /// <summary>Whether the row may be used, one entry a pixel.</summary>
    public bool[] Valid { get; } = [.. Reason.Select(r => r == PixelReason.None)];

    /// <summary>Judges every pixel.</summary>
    public static PixelJudgement Make(PixelSurvey survey, ReferenceIntensity? reference, MeasurementFacts facts, ReconstructionSettings settings)
    {
        int pixels = survey.Visibility.Length;
        var reason = new PixelReason[pixels];
        var scale = new float[pixels];
        double light = Median(survey.Light), visibility = Median(survey.Visibility);
        bool hasDark = facts.Schedule.Frames.Any(f => f.Role == FrameRole.Dark);
        for (int p = 0; p < pixels; p++)
        {
            bool bright = reference is null || reference.Counts[p] > settings.ReferenceSignificance * reference.StandardError[p];
            reason[p] = IsHot(survey, facts, hasDark, p) ? PixelReason.Hot
                : survey.SaturatedShare[p] > settings.SaturatedFrameLimit ? PixelReason.Saturated
                : !(survey.Visibility[p] > 0) || survey.Light[p] < DeadLightShare * light ? PixelReason.Dead
                : !bright ? PixelReason.LittleReference
                : survey.Visibility[p] < LowVisibilityShare * visibility ? PixelReason.LowVisibility
                : PixelReason.None;
            scale[p] = reference is not null && bright ? 1 / MathF.Sqrt(reference.Counts[p]) : 1;
        }

        return new PixelJudgement([.. reason], scale, reference is not null);
    }

    private static bool IsHot(PixelSurvey survey, MeasurementFacts facts, bool hasDark, int p) => hasDark
        ? facts.DarkCounts[p] >= HotDarkShare * facts.Manifest.Camera.FullScaleCounts
        : survey.SaturatedShare[p] >= HotFrameShare && IsLonely(survey, facts, p);

    // Without dark frames a pixel is called hot, not overexposed, when its neighbours are not.
    private static bool IsLonely(PixelSurvey survey, MeasurementFacts facts, int p)
    {
        int width = facts.FrameSize.Width, x = p % width;
        bool Full(int q) => q >= 0 && q < survey.SaturatedShare.Length && survey.SaturatedShare[q] >= HotFrameShare;
        return !(x > 0 && Full(p - 1)) && !(x + 1 < width && Full(p + 1)) && !Full(p - width) && !Full(p + width);
    }

    private static double Median(float[] values)
    {
        float[] sorted = [.. values.Where(float.IsFinite).Order()];
        return sorted.Length == 0 ? 0 : sorted[sorted.Length / 2];
    }
}
