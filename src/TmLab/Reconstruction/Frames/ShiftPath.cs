namespace TmLab.Reconstruction.Frames;

/// <summary>
/// The likeliest course of the frames' offset over the groups: least total misfit, a change of the offset costing as much as several
/// groups that do not fit, and so does beginning with another than the middle one, none (Viterbi, IEEE Trans. Inf. Theory 13, 260 (1967)).
/// </summary>
internal static class ShiftPath
{
    // Wrong frames misfit by about a half: a change of the offset must mend three groups or more, or stand at the very end.
    private const double ChangeCost = 1;

    /// <summary>One offset's number a group.</summary>
    /// <param name="misfit">misfit[group][offset], offsets rising about zero; NaN counts as that of wrong frames.</param>
    public static int[] Find(double[][] misfit)
    {
        int offsets = misfit[0].Length;
        var best = new double[misfit.Length, offsets];
        var from = new int[misfit.Length, offsets];
        for (int k = 0; k < misfit.Length; k++)
        {
            for (int o = 0; o < offsets; o++)
            {
                (double cost, from[k, o]) = k == 0 ? (ChangeCost * Math.Abs(o - (offsets / 2)), o) : Cheapest(best, k - 1, o, offsets);
                best[k, o] = cost + (double.IsNaN(misfit[k][o]) ? 1 : Math.Min(misfit[k][o], 1));
            }
        }

        var path = new int[misfit.Length];
        path[^1] = Enumerable.Range(0, offsets).MinBy(o => best[misfit.Length - 1, o]);
        for (int k = misfit.Length - 1; k > 0; k--)
        {
            path[k - 1] = from[k, path[k]];
        }

        return path;
    }

    private static (double Cost, int From) Cheapest(double[,] best, int group, int to, int offsets) =>
        Enumerable.Range(0, offsets).Select(o => (best[group, o] + (ChangeCost * Math.Abs(o - to)), o)).Min();
}
