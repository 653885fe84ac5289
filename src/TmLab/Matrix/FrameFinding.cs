using System.Collections.Immutable;
using System.Globalization;

namespace TmLab.Matrix;

/// <summary>What is likely to be wrong with frames.</summary>
public enum FrameFindingKind
{
    /// <summary>A frame is missing: from its place on every frame stands one place early. The order was put right; one step is lost.</summary>
    Dropped,

    /// <summary>A frame was delivered twice: from the copy on every frame stands one place late. The order was put right.</summary>
    Duplicated,

    /// <summary>In the frame's place stands a copy of the frame before it; later frames are in their places. One step is lost.</summary>
    Stale,

    /// <summary>Two frames stand in each other's place. The order was put right where it is known which.</summary>
    Swapped,

    /// <summary>One frame does not fit the others of its pattern, as after a shake or a flash. One step is lost.</summary>
    Shaken,

    /// <summary>The frames of a pattern do not fit each other, and it cannot be said which is wrong.</summary>
    Unexplained,
}

/// <summary>Frames that do not fit, as they stand in the file. Immutable.</summary>
/// <param name="Kind">What is likely to have happened.</param>
/// <param name="Frames">
/// The frames' numbers, rising. Of a missing frame, the place where it should stand; of a swap, both frames; where the frames cannot
/// tell, all that come into question.
/// </param>
/// <param name="Pattern">The pattern that was to be shown there.</param>
/// <param name="Repaired">Whether the pattern could be used all the same.</param>
public sealed record FrameFinding(FrameFindingKind Kind, ImmutableArray<int> Frames, int Pattern, bool Repaired)
{
    /// <summary>The finding as a sentence.</summary>
    public string Sentence => string.Create(CultureInfo.InvariantCulture, $"{What} {(Repaired ? "It was put right." : $"Pattern {Pattern} is left out there.")}");

    private string What => Kind switch
    {
        FrameFindingKind.Dropped => $"Frame {List} seems to be missing: from there on every frame stands one place early.",
        FrameFindingKind.Duplicated => $"Frame {List} seems to have been delivered twice: from there on every frame stands one place late.",
        FrameFindingKind.Stale => $"Frame {List} is a copy of the frame before it.",
        FrameFindingKind.Swapped => Frames.Length == 2
            ? $"Frames {Frames[0]} and {Frames[1]} seem to have been exchanged."
            : $"Two neighbours among frames {List} seem to have been exchanged; which two cannot be told.",
        FrameFindingKind.Shaken => $"Frame {List} does not fit the others of its pattern, as after a shake or a flash of light.",
        _ => $"Frames {List} do not fit each other.",
    };

    private string List => string.Join(", ", Frames.Select(f => f.ToString(CultureInfo.InvariantCulture)));
}
