using System.Collections.Immutable;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.Kernels;

/// <summary>One pattern's demodulation: which frames are summed with which weights, and the plane row that takes the sum.</summary>
/// <param name="PlaneRow">The row of the planes.</param>
/// <param name="Frames">The frames.</param>
/// <param name="Weights">One complex weight a frame.</param>
public sealed record PatternWeights(int PlaneRow, ImmutableArray<int> Frames, ImmutableArray<Complex64> Weights);

/// <summary>The demodulation of all patterns, back to back in memory, so that a tile is demodulated in one call. Immutable.</summary>
public sealed class FrameWeights
{
    /// <summary>Takes the patterns in any order.</summary>
    /// <exception cref="ArgumentException">A pattern has not as many weights as frames, or a negative frame or row.</exception>
    public FrameWeights(IReadOnlyCollection<PatternWeights> patterns)
    {
        foreach (PatternWeights pattern in patterns)
        {
            Preconditions.SameLength(pattern.Weights.Length, pattern.Frames.Length);
            Preconditions.Require(pattern.PlaneRow >= 0 && pattern.Frames.All(f => f >= 0), "Frames and rows count from 0.");
        }

        PlaneRow = [.. patterns.Select(p => p.PlaneRow)];
        Frame = [.. patterns.SelectMany(p => p.Frames)];
        Weight = [.. patterns.SelectMany(p => p.Weights)];
        Start = new int[patterns.Count + 1];
        int k = 0;
        foreach (PatternWeights pattern in patterns)
        {
            Start[k + 1] = Start[k] + pattern.Frames.Length;
            k++;
        }

        LargestFrame = Frame.DefaultIfEmpty(0).Max();
        LargestRow = PlaneRow.DefaultIfEmpty(0).Max();
    }

    /// <summary>The plane row of each pattern.</summary>
    internal int[] PlaneRow { get; }

    /// <summary>Pattern k's frames and weights are numbers Start[k] … Start[k + 1] − 1.</summary>
    internal int[] Start { get; }

    internal int[] Frame { get; }

    internal Complex64[] Weight { get; }

    internal int LargestFrame { get; }

    internal int LargestRow { get; }
}
