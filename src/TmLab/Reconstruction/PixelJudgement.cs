namespace TmLab.Reconstruction;

/// <summary>Which rows may be used, and the factor that each is multiplied by.</summary>
/// <param name="Valid">One entry a pixel.</param>
/// <param name="RowScale">1/√(reference intensity), or 1 where that is not known.</param>
/// <param name="Normalised">Whether the reference intensity was known.</param>
internal sealed record PixelJudgement(bool[] Valid, float[] RowScale, bool Normalised)
{
    /// <summary>
    /// A pixel is invalid when it is saturated too often, shows no modulation, or its reference does not stand out of the noise.
    /// </summary>
    public static PixelJudgement Make(PixelSurvey survey, ReferenceIntensity? reference, ReconstructionSettings settings)
    {
        int pixels = survey.Visibility.Length;
        var valid = new bool[pixels];
        var scale = new float[pixels];
        for (int p = 0; p < pixels; p++)
        {
            bool bright = reference is null || reference.Counts[p] > settings.ReferenceSignificance * reference.StandardError[p];
            valid[p] = bright && survey.SaturatedShare[p] <= settings.SaturatedFrameLimit && survey.Visibility[p] > 0;
            scale[p] = reference is not null && bright ? 1 / MathF.Sqrt(reference.Counts[p]) : 1;
        }

        return new PixelJudgement(valid, scale, reference is not null);
    }
}
