using System.Collections.Immutable;
using TmLab.Quantities;
using TmLab.Shaping;
using TmLab.Storage.Masks;

namespace TmLab.Cli.Stages;

/// <summary>A mask that was written.</summary>
/// <param name="ImageFile">The image for the modulator.</param>
/// <param name="DescriptionFile">The JSON beside it.</param>
/// <param name="Targets">Camera pixels to reach.</param>
/// <param name="TargetEnhancements">Predicted enhancement of each target.</param>
/// <param name="PredictedEnhancement">Predicted enhancement over all targets together.</param>
/// <param name="IdealEnhancement">1 + (π/4)(N − 1) (Vellekoop and Mosk, Opt. Lett. 32, 2309 (2007)).</param>
/// <param name="Warnings">What a careful user should know.</param>
internal sealed record MaskOutcome(
    string ImageFile,
    string DescriptionFile,
    ImmutableArray<CameraPixel> Targets,
    ImmutableArray<double> TargetEnhancements,
    double PredictedEnhancement,
    double IdealEnhancement,
    ImmutableArray<string> Warnings)
{
    /// <summary>What was written for a request.</summary>
    public static MaskOutcome From(MaskRequest request, FocusMask mask) => new(
        request.Output,
        MaskFile.DescriptionOf(request.Output),
        request.Targets,
        [.. mask.Targets.Select(t => t.PredictedEnhancement)],
        mask.Targets.Average(t => t.PredictedEnhancement),
        mask.IdealEnhancement,
        mask.Cautions);
}
