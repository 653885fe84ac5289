using System.Numerics;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// The triangular factor of a matrix by Householder reflections (Golub and Van Loan, Matrix Computations, 4th ed. (2013), §5.2):
/// 32 columns are reduced, then their reflections are applied to stripes of 32 of the remaining columns, which stay in a core's
/// cache meanwhile.
/// </summary>
internal static class HouseholderTriangle
{
    private const int StripeWidth = 32;

    /// <summary>Leaves R in the first min(rows, N) rows of the matrix, zeros below its diagonal.</summary>
    public static void Reduce(Complex128Matrix matrix, int rows)
    {
        int columns = Math.Min(rows, matrix.Columns);
        for (int first = 0; first < columns; first += StripeWidth)
        {
            int width = Math.Min(StripeWidth, columns - first);
            using var vectors = new SplitMatrix(width, rows);
            var tau = new Complex[width];
            ReducePanel(matrix, rows, first, vectors, tau);
            int start = first + width, stripes = (matrix.Columns - start + StripeWidth - 1) / StripeWidth;
            Parallel.For(0, stripes, stripe => ApplyToStripe(matrix, rows, first, start + (stripe * StripeWidth), vectors, tau));
        }

        for (int row = 1; row < columns; row++)
        {
            matrix.Row(row)[..row].Clear();
        }
    }

    // The panel is turned on its side, so that its columns are contiguous.
    private static void ReducePanel(Complex128Matrix matrix, int rows, int first, SplitMatrix vectors, Complex[] tau)
    {
        int width = tau.Length;
        Gather(matrix, rows, first, vectors);
        for (int k = 0; k < width; k++)
        {
            int from = first + k;
            Reflector reflector = Reflector.Make(vectors.Real(k)[from..], vectors.Imaginary(k)[from..]);
            tau[k] = reflector.Tau;
            for (int j = k + 1; j < width; j++)
            {
                Apply(vectors, k, from, tau[k], vectors.Real(j)[from..], vectors.Imaginary(j)[from..]);
            }

            // Above the diagonal stands R; the reflection vector begins below.
            for (int row = first; row < from; row++)
            {
                matrix[row, from] = new Complex(vectors.Real(k)[row], vectors.Imaginary(k)[row]);
                (vectors.Real(k)[row], vectors.Imaginary(k)[row]) = (0, 0);
            }

            matrix[from, from] = reflector.Beta;
        }
    }

    private static void ApplyToStripe(Complex128Matrix matrix, int rows, int first, int start, SplitMatrix vectors, Complex[] tau)
    {
        using var stripe = new SplitMatrix(Math.Min(StripeWidth, matrix.Columns - start), rows);
        Gather(matrix, rows, start, stripe);
        for (int k = 0; k < tau.Length; k++)
        {
            int from = first + k;
            for (int j = 0; j < stripe.Rows; j++)
            {
                Apply(vectors, k, from, tau[k], stripe.Real(j)[from..], stripe.Imaginary(j)[from..]);
            }
        }

        for (int row = first; row < rows; row++)
        {
            Span<Complex> to = matrix.Row(row).Slice(start, stripe.Rows);
            for (int j = 0; j < to.Length; j++)
            {
                to[j] = new Complex(stripe.Real(j)[row], stripe.Imaginary(j)[row]);
            }
        }
    }

    // y ← H† y = y − conj(τ) v (v†y).
    private static void Apply(SplitMatrix vectors, int k, int from, Complex tau, Span<double> yr, Span<double> yi)
    {
        ReadOnlySpan<double> vr = vectors.Real(k)[from..], vi = vectors.Imaginary(k)[from..];
        SplitRow.AddMultiple(-Complex.Conjugate(tau) * SplitRow.Inner(vr, vi, yr, yi), vr, vi, yr, yi);
    }

    private static void Gather(Complex128Matrix matrix, int rows, int start, SplitMatrix columns)
    {
        for (int row = 0; row < rows; row++)
        {
            ReadOnlySpan<Complex> from = matrix.Row(row).Slice(start, columns.Rows);
            for (int j = 0; j < from.Length; j++)
            {
                columns.Real(j)[row] = from[j].Real;
                columns.Imaginary(j)[row] = from[j].Imaginary;
            }
        }
    }
}
