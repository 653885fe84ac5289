using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Reconstruction.Drift;

namespace TmLab.Reconstruction.Frames;

/// <summary>
/// Groups that do not fit even with the phases and the power of their frames free: something else than drift happened to them.
/// </summary>
internal static class MisfittingGroups
{
    // Of a group like the others the misfit is 1; with a pattern of double brightness, 2.
    private const double LargestRatio = 6;

    // A misfit that is large beside the noise but small beside the fringes does no harm.
    private const double HarmlessMisfit = 0.02;

    /// <summary>Them, with the frame that is likely to be the cause.</summary>
    /// <param name="search">The frames as they stand, on which the phases were found.</param>
    /// <param name="phases">The phases inside the groups.</param>
    public static ImmutableArray<(StepGroup Group, FrameFinding Finding)> Find(FrameSearchOutcome search, GroupPhases phases)
    {
        double[] sorted = [.. phases.Misfit.Where(double.IsFinite).Order()];
        double limit = LargestRatio * (sorted.Length == 0 ? 1 : sorted[sorted.Length / 2]);
        return
        [
            .. Enumerable.Range(0, phases.Groups.Length)
                .Where(k => phases.Misfit[k] > limit && phases.ResidualShare(k) > HarmlessMisfit)
                .Select(k => (phases.Groups[k], Finding(phases.Groups[k], search.LoneFrame(phases.Groups[k])))),
        ];
    }

    private static FrameFinding Finding(StepGroup group, int? lone) => lone is int frame
        ? new FrameFinding(FrameFindingKind.Shaken, [frame], group.Mode, false)
        : new FrameFinding(FrameFindingKind.Unexplained, group.Frames, group.Mode, false);
}
