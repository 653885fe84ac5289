using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;
using TmLab.Numerics;

namespace TmLab.Simulation;

/// <summary>
/// The field on the camera while each pattern is shown: E[k, p] = Σ_n B[k, n] T[p, n]. Hadamard patterns go through the fast
/// Walsh–Hadamard transform, others through the product with B as it is defined.
/// </summary>
internal static class PatternFields
{
    /// <summary>The fields of all patterns.</summary>
    /// <param name="modes">Which patterns.</param>
    /// <param name="customPatterns">B, row-major, for custom patterns; otherwise ignored.</param>
    /// <param name="transmission">T transposed: one row a mode.</param>
    /// <param name="options">Threads and cancellation.</param>
    public static FieldPlanes Compute(
        ModeDescription modes, ImmutableArray<Complex> customPatterns, FieldPlanes transmission, ParallelOptions options)
    {
        var fields = new FieldPlanes(modes.PatternCount, transmission.Columns);
        if (modes.Basis is BasisKind.Hadamard or BasisKind.HadamardBinary)
        {
            Hadamard(modes, transmission, fields);
        }
        else
        {
            Parallel.For(0, modes.PatternCount, options, k => Product(Row(modes, customPatterns, k), transmission, fields, k));
        }

        return fields;
    }

    /// <summary>Row k of the pattern matrix B.</summary>
    public static Complex[] Row(ModeDescription modes, ImmutableArray<Complex> customPatterns, int k) => modes.Basis switch
    {
        BasisKind.Hadamard => [.. Enumerable.Range(0, modes.ModeCount).Select(n => (Complex)HadamardSign(modes, k, n))],
        BasisKind.HadamardBinary => [.. Enumerable.Range(0, modes.ModeCount).Select(n => (Complex)((1 + HadamardSign(modes, k, n)) / 2))],
        BasisKind.Fourier => [.. Enumerable.Range(0, modes.ModeCount).Select(n => FourierElement(modes, k, n))],
        BasisKind.Pixel => [.. Enumerable.Range(0, modes.ModeCount).Select(n => n == k ? Complex.One : Complex.Zero)],
        _ => [.. customPatterns.AsSpan().Slice(k * modes.ModeCount, modes.ModeCount)],
    };

    /// <summary>The natural number of the Hadamard row that the measurement calls k; sequency s is the bit reversal of s's Gray code.</summary>
    internal static int NaturalRow(ModeDescription modes, int k)
    {
        if (modes.Ordering == HadamardOrdering.Natural)
        {
            return k;
        }

        int gray = k ^ (k >> 1);
        int natural = 0;
        for (int bit = modes.ModeCount >> 1; bit > 0; bit >>= 1, gray >>= 1)
        {
            natural += (gray & 1) * bit;
        }

        return natural;
    }

    private static double HadamardSign(ModeDescription modes, int k, int n) =>
        1 - (2 * (BitOperations.PopCount((uint)(NaturalRow(modes, k) & n)) & 1));

    private static Complex FourierElement(ModeDescription modes, int k, int n)
    {
        (int k1, int k2) = Math.DivRem(k, modes.Grid.Columns);
        (int n1, int n2) = Math.DivRem(n, modes.Grid.Columns);
        double turns = ((double)(k1 * n1) / modes.Grid.Rows) + ((double)(k2 * n2) / modes.Grid.Columns);
        (double sin, double cos) = PortableMath.SinCosTurns(turns);
        return new Complex(cos, sin);
    }

    private static void Product(Complex[] row, FieldPlanes transmission, FieldPlanes fields, int k)
    {
        for (int n = 0; n < row.Length; n++)
        {
            if (row[n] != Complex.Zero)
            {
                ComplexRows.AddScaled(
                    (float)row[n].Real, (float)row[n].Imaginary,
                    transmission.Real(n), transmission.Imaginary(n), fields.Real(k), fields.Imaginary(k));
            }
        }
    }

    private static void Hadamard(ModeDescription modes, FieldPlanes transmission, FieldPlanes fields)
    {
        Preconditions.Require(BitOperations.IsPow2(modes.ModeCount), "Hadamard patterns need a power of two of macro-pixels.");
        using var natural = new FieldPlanes(modes.ModeCount, transmission.Columns);
        natural.Add(transmission);
        for (int stride = 1; stride < modes.ModeCount; stride *= 2)
        {
            ButterflyStage(natural, stride);
        }

        for (int k = 0; k < modes.PatternCount; k++)
        {
            CopyPattern(natural, NaturalRow(modes, k), modes.Basis == BasisKind.HadamardBinary, fields, k);
        }
    }

    private static void ButterflyStage(FieldPlanes natural, int stride)
    {
        for (int n = 0; n < natural.Rows; n++)
        {
            if ((n & stride) == 0)
            {
                ComplexRows.Butterfly(natural.Real(n), natural.Real(n + stride));
                ComplexRows.Butterfly(natural.Imaginary(n), natural.Imaginary(n + stride));
            }
        }
    }

    /// <summary>H as it is, or (1 + H)/2, whose field is the mean of those of pattern 0 and of pattern k.</summary>
    private static void CopyPattern(FieldPlanes natural, int row, bool binary, FieldPlanes fields, int k)
    {
        float own = binary ? 0.5f : 1;
        ComplexRows.AddScaled(own, 0, natural.Real(row), natural.Imaginary(row), fields.Real(k), fields.Imaginary(k));
        if (binary)
        {
            ComplexRows.AddScaled(0.5f, 0, natural.Real(0), natural.Imaginary(0), fields.Real(k), fields.Imaginary(k));
        }
    }
}
