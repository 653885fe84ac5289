using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace TmLab.Numerics.Kernels;

/// <summary>The fit of one phase-stepped group as this kernel needs it, one number a frame.</summary>
/// <param name="Background">α: a = Σ α_s I_s.</param>
/// <param name="FieldReal">Re w: Re D = Σ Re w_s I_s.</param>
/// <param name="FieldImaginary">Im w.</param>
/// <param name="Cosine">cos θ_s: the model is a + 2 (Re D cos θ_s − Im D sin θ_s).</param>
/// <param name="Sine">sin θ_s.</param>
public sealed record FringeWeights(float[] Background, float[] FieldReal, float[] FieldImaginary, float[] Cosine, float[] Sine);

/// <summary>
/// Sums over groups, pixel by pixel, of what tells a good pixel from a bad one: modulation depth 2|D|/(a − dark), squared residual
/// of the fit, level a − dark, number of frames at full scale. Pixels lie along the lanes.
/// </summary>
public sealed class FringeStatistics
{
    private readonly float[] _dark;
    private readonly float _fullScale;

    /// <summary>Starts with zero sums.</summary>
    /// <param name="dark">Dark level of each pixel, counts; a whole number of registers of counts.</param>
    /// <param name="fullScale">The largest count.</param>
    public FringeStatistics(float[] dark, int fullScale)
    {
        Preconditions.Require(dark.Length % Vector<ushort>.Count == 0, "The pixels must fill whole registers.");
        (_dark, _fullScale) = (dark, fullScale);
        (Visibility, SquaredResidual) = (new float[dark.Length], new float[dark.Length]);
        (Level, Saturated) = (new float[dark.Length], new float[dark.Length]);
    }

    /// <summary>Σ 2|D|/(a − dark); groups without light add nothing.</summary>
    public float[] Visibility { get; }

    /// <summary>Σ (I − model)².</summary>
    public float[] SquaredResidual { get; }

    /// <summary>Σ (a − dark).</summary>
    public float[] Level { get; }

    /// <summary>Number of frames at full scale.</summary>
    public float[] Saturated { get; }

    /// <summary>Adds a group.</summary>
    /// <param name="counts">Counts (frame, pixel), as many pixels a frame as there are sums.</param>
    /// <param name="weights">The group's fit.</param>
    /// <exception cref="ArgumentException">Lengths disagree.</exception>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public void Add(ReadOnlySpan<ushort> counts, FringeWeights weights)
    {
        Preconditions.SameLength(counts.Length, (long)_dark.Length * weights.Background.Length);
        for (int p = 0; p < _dark.Length; p += Vector<ushort>.Count)
        {
            Vector<float> a0 = default, a1 = default, re0 = default, re1 = default, im0 = default, im1 = default;
            for (int s = 0; s < weights.Background.Length; s++)
            {
                (Vector<float> low, Vector<float> high) = Load(counts, (s * _dark.Length) + p);
                a0 += low * weights.Background[s];
                a1 += high * weights.Background[s];
                re0 += low * weights.FieldReal[s];
                re1 += high * weights.FieldReal[s];
                im0 += low * weights.FieldImaginary[s];
                im1 += high * weights.FieldImaginary[s];
            }

            int next = p + Vector<float>.Count;
            AddDepth(p, a0, re0, im0);
            AddDepth(next, a1, re1, im1);
            for (int s = 0; s < weights.Background.Length; s++)
            {
                (Vector<float> low, Vector<float> high) = Load(counts, (s * _dark.Length) + p);
                AddFrame(p, low, a0 + (((re0 * weights.Cosine[s]) - (im0 * weights.Sine[s])) * 2));
                AddFrame(next, high, a1 + (((re1 * weights.Cosine[s]) - (im1 * weights.Sine[s])) * 2));
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static (Vector<float> Low, Vector<float> High) Load(ReadOnlySpan<ushort> counts, int at)
    {
        Vector<ushort> packed = Vector.LoadUnsafe(ref MemoryMarshal.GetReference(counts), (nuint)at);
        Vector.Widen(packed, out Vector<uint> low, out Vector<uint> high);
        return (Vector.ConvertToSingle(low.As<uint, int>()), Vector.ConvertToSingle(high.As<uint, int>()));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void AddDepth(int p, Vector<float> a, Vector<float> re, Vector<float> im)
    {
        Vector<float> level = a - new Vector<float>(_dark, p);
        Vector<float> depth = Vector.SquareRoot((re * re) + (im * im)) * 2 / level;
        Vector<float> lit = Vector.ConditionalSelect(Vector.GreaterThan(level, Vector<float>.Zero), depth, Vector<float>.Zero);
        (new Vector<float>(Visibility, p) + lit).CopyTo(Visibility, p);
        (new Vector<float>(Level, p) + level).CopyTo(Level, p);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void AddFrame(int p, Vector<float> count, Vector<float> model)
    {
        Vector<float> residual = count - model;
        (new Vector<float>(SquaredResidual, p) + (residual * residual)).CopyTo(SquaredResidual, p);
        Vector<float> full = Vector.ConditionalSelect(
            Vector.GreaterThanOrEqual(count, new Vector<float>(_fullScale)), Vector<float>.One, Vector<float>.Zero);
        (new Vector<float>(Saturated, p) + full).CopyTo(Saturated, p);
    }
}
