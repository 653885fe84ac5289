using System.Numerics;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// Singular values by one-sided Jacobi rotations, which make the rows of B orthogonal: J B = Σ W†. Small values come out with
/// high relative accuracy (Demmel and Veselić, SIAM J. Matrix Anal. Appl. 13, 1204 (1992)). Pairs are visited in rounds of
/// disjoint pairs (round-robin ordering, Brent and Luk, SIAM J. Sci. Stat. Comput. 6, 69 (1985)), a round on all cores.
/// </summary>
internal sealed class JacobiSvd
{
    private const int SweepsAtMost = 60;
    private const double UnitRoundoff = 1.1102230246251565e-16;

    // Below it, inner products are noise of underflow.
    private const double SmallestProduct = 1e-300;

    private readonly SplitMatrix _rows;
    private readonly SplitMatrix? _rotations;
    private readonly double _tolerance;

    private JacobiSvd(SplitMatrix rows, SplitMatrix? rotations)
    {
        _rows = rows;
        _rotations = rotations;
        _tolerance = Math.Max(10, rows.Columns) * UnitRoundoff;
    }

    /// <summary>Makes the rows orthogonal; <paramref name="rotations"/> starts as the identity and becomes J.</summary>
    /// <returns>The rows' norms.</returns>
    public static double[] Solve(SplitMatrix rows, SplitMatrix? rotations)
    {
        var solver = new JacobiSvd(rows, rotations);
        int sweep = 0;
        while (solver.Sweep())
        {
            if (++sweep > SweepsAtMost)
            {
                throw new LinearAlgebraException("one-sided Jacobi", sweep);
            }
        }

        var norms = new double[rows.Rows];
        for (int row = 0; row < norms.Length; row++)
        {
            norms[row] = Math.Sqrt(SplitRow.Inner(rows.Real(row), rows.Imaginary(row), rows.Real(row), rows.Imaginary(row)).Real);
        }

        return norms;
    }

    // Whether any pair still needed a rotation.
    private bool Sweep()
    {
        int n = _rows.Rows, players = n + (n % 2), rotated = 0;
        for (int round = 0; round < players - 1; round++)
        {
            int turn = round;
            Parallel.For(0, players / 2, pair =>
            {
                (int p, int q) = Pair(turn, pair, players);
                if (Math.Max(p, q) < n && RotatePair(Math.Min(p, q), Math.Max(p, q)))
                {
                    Interlocked.Exchange(ref rotated, 1);
                }
            });
        }

        return rotated != 0;
    }

    private static (int P, int Q) Pair(int round, int pair, int players)
    {
        int last = players - 1;
        return pair == 0 ? (last, round) : ((round + pair) % last, (round + last - pair) % last);
    }

    private bool RotatePair(int p, int q)
    {
        double a = Norm2(p), b = Norm2(q);
        Complex c = SplitRow.Inner(_rows.Real(q), _rows.Imaginary(q), _rows.Real(p), _rows.Imaginary(p));
        double size = c.Magnitude;
        if (size <= _tolerance * Math.Sqrt(a) * Math.Sqrt(b) || size < SmallestProduct)
        {
            return false;
        }

        double zeta = (b - a) / (2 * size);
        double t = Math.CopySign(1, zeta) / (Math.Abs(zeta) + Math.Sqrt(1 + (zeta * zeta)));
        double cosine = 1 / Math.Sqrt(1 + (t * t));
        Turn(_rows, p, q, c / size, cosine, cosine * t);
        if (_rotations is not null)
        {
            Turn(_rotations, p, q, c / size, cosine, cosine * t);
        }

        return true;
    }

    private double Norm2(int row) => SplitRow.Inner(_rows.Real(row), _rows.Imaginary(row), _rows.Real(row), _rows.Imaginary(row)).Real;

    // Row q takes the phase that makes the inner product real, then the two turn.
    private static void Turn(SplitMatrix matrix, int p, int q, Complex phase, double cosine, double sine)
    {
        Span<double> qr = matrix.Real(q), qi = matrix.Imaginary(q);
        for (int k = 0; k < qr.Length; k++)
        {
            (qr[k], qi[k]) = ((phase.Real * qr[k]) - (phase.Imaginary * qi[k]), (phase.Real * qi[k]) + (phase.Imaginary * qr[k]));
        }

        SplitRow.Rotate(matrix.Real(p), qr, cosine, sine);
        SplitRow.Rotate(matrix.Imaginary(p), qi, cosine, sine);
    }
}
