namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// Eigenvalues and vectors of a real symmetric tridiagonal matrix by the implicit QL iteration (Wilkinson and Reinsch,
/// Handbook for Automatic Computation II (1971), contribution II/4, imtql2). The rotations of one sweep are applied to the
/// vectors afterwards, in stripes of columns on all cores; a stripe's arithmetic does not depend on the number of threads.
/// </summary>
internal static class TridiagonalQl
{
    private const int SweepsAtMost = 60;
    private const int StripeWidth = 256;

    /// <summary>
    /// Replaces <paramref name="diagonal"/> by the eigenvalues (no order) and row j of <paramref name="vectors"/>' real plane,
    /// which is the identity at the start, by the eigenvector of value j.
    /// </summary>
    /// <param name="diagonal">T's diagonal.</param>
    /// <param name="offDiagonal">T's off-diagonal, its last element unused; destroyed.</param>
    /// <param name="vectors">Null for values only.</param>
    public static void Solve(double[] diagonal, double[] offDiagonal, SplitMatrix? vectors)
    {
        int n = diagonal.Length;
        var cosine = new double[n];
        var sine = new double[n];
        for (int low = 0; low < n; low++)
        {
            int sweeps = 0;
            int high = Block(diagonal, offDiagonal, low);
            while (high > low)
            {
                if (++sweeps > SweepsAtMost)
                {
                    throw new LinearAlgebraException("implicit QL", low + 1);
                }

                int reached = Sweep(diagonal, offDiagonal, low, high, cosine, sine);
                Apply(vectors, reached, high, cosine, sine);
                high = Block(diagonal, offDiagonal, low);
            }
        }
    }

    // The end of the block that begins at low: the first negligible off-diagonal element.
    private static int Block(double[] d, double[] e, int low)
    {
        int end = low;
        while (end < d.Length - 1)
        {
            double size = Math.Abs(d[end]) + Math.Abs(d[end + 1]);
            if (Math.Abs(e[end]) + size == size)
            {
                break;
            }

            end++;
        }

        return end;
    }

    // One implicit QL sweep from high down to low; returns the lowest index rotated (the sweep may split the block early).
    private static int Sweep(double[] d, double[] e, int low, int high, double[] cosine, double[] sine)
    {
        double g = (d[low + 1] - d[low]) / (2 * e[low]);
        double r = Hypotenuse(g, 1);
        g = d[high] - d[low] + (e[low] / (g + Math.CopySign(r, g)));
        double s = 1, c = 1, p = 0;
        for (int i = high - 1; i >= low; i--)
        {
            double f = s * e[i], b = c * e[i];
            r = Hypotenuse(f, g);
            e[i + 1] = r;
            if (r == 0)
            {
                d[i + 1] -= p;
                e[high] = 0;
                return i + 1;
            }

            s = f / r;
            c = g / r;
            g = d[i + 1] - p;
            r = ((d[i] - g) * s) + (2 * c * b);
            p = s * r;
            d[i + 1] = g + p;
            g = (c * r) - b;
            (cosine[i], sine[i]) = (c, s);
        }

        d[low] -= p;
        e[low] = g;
        e[high] = 0;
        return low;
    }

    private static double Hypotenuse(double x, double y) => double.Hypot(x, y);

    private static void Apply(SplitMatrix? vectors, int low, int high, double[] cosine, double[] sine)
    {
        if (vectors is null)
        {
            return;
        }

        int stripes = (vectors.Columns + StripeWidth - 1) / StripeWidth;
        Parallel.For(0, stripes, stripe =>
        {
            int first = stripe * StripeWidth, width = Math.Min(StripeWidth, vectors.Columns - first);
            for (int i = high - 1; i >= low; i--)
            {
                SplitRow.Rotate(vectors.Real(i).Slice(first, width), vectors.Real(i + 1).Slice(first, width), cosine[i], sine[i]);
            }
        });
    }
}
