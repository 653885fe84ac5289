using System.Numerics;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// Reduction of a Hermitian matrix to a real symmetric tridiagonal one, A = Q T Q†, by Householder reflections (Golub and
/// Van Loan, Matrix Computations, 4th ed. (2013), §8.3.1, with LAPACK's real-β reflector so that T is real). Reflection k is
/// H_k = I − τ_k v_k v_k†, Q = H_0 H_1 … H_{n−2}; v_k replaces row k of the matrix right of the diagonal.
/// </summary>
internal sealed class HermitianTridiagonal
{
    private readonly SplitMatrix _matrix;
    private readonly Complex[] _tau;

    private HermitianTridiagonal(SplitMatrix matrix)
    {
        _matrix = matrix;
        int n = matrix.Rows;
        _tau = new Complex[n];
        Diagonal = new double[n];
        OffDiagonal = new double[n];
    }

    /// <summary>T's diagonal.</summary>
    public double[] Diagonal { get; }

    /// <summary>T's off-diagonal: element k stands between k and k + 1; the last one is 0.</summary>
    public double[] OffDiagonal { get; }

    /// <summary>Reduces the matrix, which is used up and keeps the reflections.</summary>
    public static HermitianTridiagonal Reduce(SplitMatrix matrix)
    {
        var reduction = new HermitianTridiagonal(matrix);
        int n = matrix.Rows;
        var w = new SplitMatrix(2, n);
        using (w)
        {
            for (int k = 0; k < n - 1; k++)
            {
                reduction.Diagonal[k] = matrix.Real(k)[k];
                reduction.Reflect(k);
                reduction.Update(k, w);
            }
        }

        if (n > 0)
        {
            reduction.Diagonal[n - 1] = matrix.Real(n - 1)[n - 1];
        }

        return reduction;
    }

    /// <summary>y ← Q y, for a vector y given as planes.</summary>
    public void ApplyQ(Span<double> real, Span<double> imaginary)
    {
        for (int k = _matrix.Rows - 2; k >= 0; k--)
        {
            ReadOnlySpan<double> vr = _matrix.Real(k)[(k + 1)..], vi = _matrix.Imaginary(k)[(k + 1)..];
            Span<double> yr = real[(k + 1)..], yi = imaginary[(k + 1)..];
            SplitRow.AddMultiple(-_tau[k] * SplitRow.Inner(vr, vi, yr, yi), vr, vi, yr, yi);
        }
    }

    // The column below the diagonal is the conjugate of the row right of it.
    private void Reflect(int k)
    {
        Span<double> vr = _matrix.Real(k)[(k + 1)..], vi = _matrix.Imaginary(k)[(k + 1)..];
        for (int j = 0; j < vi.Length; j++)
        {
            vi[j] = -vi[j];
        }

        Reflector reflector = Reflector.Make(vr, vi);
        _tau[k] = reflector.Tau;
        OffDiagonal[k] = reflector.Beta;
    }

    // A ← A − w v† − v w†, with p = A v, w = τ p − (|τ|² v†p / 2) v.
    private void Update(int k, SplitMatrix workspace)
    {
        Complex tau = _tau[k];
        int n = _matrix.Rows, first = k + 1;
        if (tau == Complex.Zero)
        {
            return;
        }

        ForRows(first, n, row => MultiplyRow(k, row, workspace));
        Span<double> wr = workspace.Real(0)[first..], wi = workspace.Imaginary(0)[first..];
        ReadOnlySpan<double> vr = _matrix.Real(k)[first..], vi = _matrix.Imaginary(k)[first..];
        double half = SplitRow.Inner(vr, vi, wr, wi).Real * ((tau.Real * tau.Real) + (tau.Imaginary * tau.Imaginary)) / 2;
        for (int j = 0; j < wr.Length; j++)
        {
            Complex w = (tau * new Complex(wr[j], wi[j])) - (half * new Complex(vr[j], vi[j]));
            (wr[j], wi[j]) = (w.Real, w.Imaginary);
        }

        Conjugate(wi, workspace.Imaginary(1)[first..]);
        Conjugate(vi, workspace.Real(1)[first..]);
        ForRows(first, n, row => UpdateRow(k, row, workspace));
    }

    // (A v)_i = Σ_j A_ij v_j.
    private void MultiplyRow(int k, int row, SplitMatrix workspace)
    {
        int first = k + 1;
        ReadOnlySpan<double> ar = _matrix.Real(row)[first..], ai = _matrix.Imaginary(row)[first..];
        ReadOnlySpan<double> vr = _matrix.Real(k)[first..], vi = _matrix.Imaginary(k)[first..];
        Complex p = InnerOfRow(ar, ai, vr, vi);
        workspace.Real(0)[row] = p.Real;
        workspace.Imaginary(0)[row] = p.Imaginary;
    }

    // Σ a_j v_j without conjugation.
    private static Complex InnerOfRow(ReadOnlySpan<double> ar, ReadOnlySpan<double> ai, ReadOnlySpan<double> vr, ReadOnlySpan<double> vi)
    {
        Complex swapped = SplitRow.Inner(ar, ai, vi, vr);

        // Inner(a, (vi, vr)) = Σ (ar vi + ai vr) + i Σ (ar vr − ai vi).
        return new Complex(swapped.Imaginary, swapped.Real);
    }

    private void UpdateRow(int k, int row, SplitMatrix workspace)
    {
        int first = k + 1;
        Span<double> ar = _matrix.Real(row)[first..], ai = _matrix.Imaginary(row)[first..];
        var w = new Complex(workspace.Real(0)[row], workspace.Imaginary(0)[row]);
        var v = new Complex(_matrix.Real(k)[row], _matrix.Imaginary(k)[row]);
        SplitRow.AddMultiple(-w, _matrix.Real(k)[first..], workspace.Real(1)[first..], ar, ai);
        SplitRow.AddMultiple(-v, workspace.Real(0)[first..], workspace.Imaginary(1)[first..], ar, ai);
    }

    private static void Conjugate(ReadOnlySpan<double> from, Span<double> to)
    {
        for (int j = 0; j < from.Length; j++)
        {
            to[j] = -from[j];
        }
    }

    private static void ForRows(int first, int end, Action<int> action)
    {
        const int smallest = 96;
        if (end - first < smallest)
        {
            for (int row = first; row < end; row++)
            {
                action(row);
            }

            return;
        }

        Parallel.For(first, end, action);
    }
}
