using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;

namespace TmLab.Measurement;

/// <summary>Checks of the patterns that a manifest names.</summary>
public static class ModeChecks
{
    /// <summary>
    /// Whether the number of patterns suits the basis and the grid: a power of two for Hadamard bases (Sylvester's construction),
    /// equal to rows × columns for complete bases, at least that for custom ones (K ≥ N, or T is not determined).
    /// </summary>
    public static ImmutableArray<InputProblem> Check(ModeDescription modes, string file)
    {
        var problems = new ProblemList(file);
        CheckPowerOfTwo(modes, problems);
        CheckGrid(modes, problems);
        return problems.ToImmutable();
    }

    /// <summary>Whether every element of a custom pattern matrix (K × N, row-major) is a finite number.</summary>
    public static ImmutableArray<InputProblem> CheckPatterns(ReadOnlySpan<Complex> patterns, int modeCount, string file)
    {
        var problems = new ProblemList(file);
        var bad = new List<(string, string, string)>();
        for (int i = 0; i < patterns.Length; i++)
        {
            if (!Complex.IsFinite(patterns[i]))
            {
                bad.Add(($"pattern {i / modeCount}, mode {i % modeCount}", "is not a finite number", "write a number there"));
            }
        }

        problems.AddOfOneKind(bad);
        return problems.ToImmutable();
    }

    private static void CheckPowerOfTwo(ModeDescription modes, ProblemList problems)
    {
        bool isHadamard = modes.Basis is BasisKind.Hadamard or BasisKind.HadamardBinary;
        if (isHadamard && !BitOperations.IsPow2(modes.PatternCount))
        {
            problems.Add(
                "modes.count", $"{modes.PatternCount} is not a power of two, which a Hadamard basis needs",
                $"use {BitOperations.RoundUpToPowerOf2((uint)modes.PatternCount) / 2} or {BitOperations.RoundUpToPowerOf2((uint)modes.PatternCount)}, or another basis");
        }
    }

    private static void CheckGrid(ModeDescription modes, ProblemList problems)
    {
        if (modes.Basis == BasisKind.Custom && modes.PatternCount < modes.ModeCount)
        {
            problems.Add(
                "modes.count", $"{modes.PatternCount} patterns are fewer than the {modes.ModeCount} macro-pixels of the {modes.Grid} grid",
                "show at least as many patterns as macro-pixels");
        }
        else if (modes.Basis != BasisKind.Custom && modes.PatternCount != modes.ModeCount)
        {
            problems.Add(
                "modes.grid", $"the {modes.Grid} grid holds {modes.ModeCount} macro-pixels, but modes.count is {modes.PatternCount}",
                "make rows × columns equal to the count");
        }
    }
}
