using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace TmLab.Numerics.Transforms;

/// <summary>The sign in the exponent of a Fourier transform.</summary>
public enum FourierSign
{
    /// <summary>exp(−2πi k n / N): the usual forward transform.</summary>
    Negative,

    /// <summary>exp(+2πi k n / N).</summary>
    Positive,
}

/// <summary>
/// The discrete Fourier transform along the rows of a tile, unnormalised: y[k] = Σ_n x[n] exp(∓2πi k n / N), for any N. Self-sorting
/// mixed-radix passes (Stockham; see Van Loan, Computational Frameworks for the Fast Fourier Transform (1992), §1.7 and §2):
/// each prime factor r costs r operations a number. A plan is immutable and may be used by several threads.
/// </summary>
public sealed class FourierPlan
{
    private readonly Pass[] _passes;

    /// <summary>Plans transforms of a length.</summary>
    /// <param name="length">Number of rows N ≥ 1.</param>
    /// <param name="sign">The exponent's sign.</param>
    public FourierPlan(int length, FourierSign sign)
    {
        Preconditions.InRange(length, 1, 1 << 24);
        Length = length;
        _passes = [.. PlanPasses(length, sign == FourierSign.Negative ? -1 : 1)];
    }

    /// <summary>Number of rows N.</summary>
    public int Length { get; }

    /// <summary>
    /// Transforms planes of shape (N, width) along their first axis. The result is in <paramref name="real"/> and
    /// <paramref name="imaginary"/>; the scratch planes are overwritten.
    /// </summary>
    /// <param name="real">Real parts, N · width.</param>
    /// <param name="imaginary">Imaginary parts, N · width.</param>
    /// <param name="scratchReal">Scratch, N · width.</param>
    /// <param name="scratchImaginary">Scratch, N · width.</param>
    /// <param name="width">Numbers a row; a multiple of the register's number of singles.</param>
    /// <exception cref="ArgumentException">The planes do not have the shape.</exception>
    public void Transform(
        Span<float> real, Span<float> imaginary, Span<float> scratchReal, Span<float> scratchImaginary, int width)
    {
        Preconditions.Require(width > 0 && width % Vector<float>.Count == 0, "The width must fill whole registers.");
        Preconditions.SameLength(real.Length, (long)Length * width);
        Preconditions.SameLength(imaginary.Length, real.Length);
        Preconditions.SameLength(scratchReal.Length, real.Length);
        Preconditions.SameLength(scratchImaginary.Length, real.Length);
        bool inScratch = false;
        foreach (Pass pass in _passes)
        {
            if (inScratch)
            {
                pass.Run(scratchReal, scratchImaginary, real, imaginary, width);
            }
            else
            {
                pass.Run(real, imaginary, scratchReal, scratchImaginary, width);
            }

            inScratch = !inScratch;
        }

        if (inScratch)
        {
            scratchReal.CopyTo(real);
            scratchImaginary.CopyTo(imaginary);
        }
    }

    private static IEnumerable<Pass> PlanPasses(int length, int sign)
    {
        int remaining = length, stride = 1;
        foreach (int radix in Factors(length))
        {
            yield return new Pass(radix, remaining, stride, sign);
            remaining /= radix;
            stride *= radix;
        }
    }

    private static IEnumerable<int> Factors(int length)
    {
        for (; length % 4 == 0; length /= 4)
        {
            yield return 4;
        }

        for (int prime = 2; length > 1; prime++)
        {
            for (; length % prime == 0; length /= prime)
            {
                yield return prime;
            }
        }
    }

    /// <summary>
    /// One pass: for p &lt; m = n/r and every k &lt; r, out[r p + k] = w_n^{p k} Σ_j w_r^{j k} in[p + m j], each index standing for
    /// <c>stride</c> neighbouring rows.
    /// </summary>
    private sealed class Pass
    {
        private readonly int _radix;
        private readonly int _blocks;
        private readonly int _stride;
        private readonly float[] _cos;
        private readonly float[] _sin;

        public Pass(int radix, int length, int stride, int sign)
        {
            _radix = radix;
            _blocks = length / radix;
            _stride = stride;
            (_cos, _sin) = Coefficients(radix, length, sign);
        }

        public void Run(
            ReadOnlySpan<float> inRe, ReadOnlySpan<float> inIm, Span<float> outRe, Span<float> outIm, int width)
        {
            int run = _stride * width;
            for (int p = 0; p < _blocks; p++)
            {
                for (int k = 0; k < _radix; k++)
                {
                    int target = ((_radix * p) + k) * run;
                    int table = ((p * _radix) + k) * _radix;
                    Combine(inRe, inIm, p * run, table, outRe.Slice(target, run), outIm.Slice(target, run));
                }
            }
        }

        // c[p, k, j] = w_n^{p k} w_r^{j k}: twiddle and small transform in one coefficient, computed in double precision.
        private static (float[] Cos, float[] Sin) Coefficients(int radix, int length, int sign)
        {
            int blocks = length / radix;
            var cos = new float[blocks * radix * radix];
            var sin = new float[cos.Length];
            for (int at = 0; at < cos.Length; at++)
            {
                long p = at / (radix * radix), k = at / radix % radix, j = at % radix;
                long turns = ((p * k) + (j * k % radix * blocks)) % length;
                double angle = sign * 2 * Math.PI * turns / length;
                cos[at] = (float)Math.Cos(angle);
                sin[at] = (float)Math.Sin(angle);
            }

            return (cos, sin);
        }

        [MethodImpl(MethodImplOptions.AggressiveOptimization)]
        private void Combine(
            ReadOnlySpan<float> inRe, ReadOnlySpan<float> inIm, int start, int table, Span<float> outRe, Span<float> outIm)
        {
            int apart = _blocks * outRe.Length;
            ref float re = ref MemoryMarshal.GetReference(inRe[start..]);
            ref float im = ref MemoryMarshal.GetReference(inIm[start..]);
            for (int at = 0; at < outRe.Length; at += Vector<float>.Count)
            {
                Vector<float> sumRe = default, sumIm = default;
                for (int j = 0; j < _radix; j++)
                {
                    Vector<float> xr = Vector.LoadUnsafe(ref re, (nuint)((j * apart) + at));
                    Vector<float> xi = Vector.LoadUnsafe(ref im, (nuint)((j * apart) + at));
                    float c = _cos[table + j], s = _sin[table + j];
                    sumRe += (xr * c) - (xi * s);
                    sumIm += (xr * s) + (xi * c);
                }

                sumRe.CopyTo(outRe[at..]);
                sumIm.CopyTo(outIm[at..]);
            }
        }
    }
}
