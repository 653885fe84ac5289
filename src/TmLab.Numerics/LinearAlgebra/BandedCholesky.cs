namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// The factor A = L Lᵀ of a symmetric positive-definite band matrix, with the solution of A x = b and the diagonal of A⁻¹ (the
/// variances, when A is an information matrix) by the recursion of Takahashi, Fagan &amp; Chin (1973). n w² operations for n unknowns and
/// half-bandwidth w.
/// </summary>
public sealed class BandedCholesky
{
    private readonly int[] _place;
    private readonly int _width;
    private readonly double[] _band;

    internal BandedCholesky(int[] place, int width)
    {
        _place = place;
        _width = width;
        _band = new double[(long)place.Length * (width + 1)];
    }

    /// <summary>Half-bandwidth after renumbering.</summary>
    public int HalfBandwidth => _width;

    private int Size => _place.Length;

    /// <summary>Solves A x = b.</summary>
    public double[] Solve(ReadOnlySpan<double> right)
    {
        Preconditions.SameLength(right.Length, Size);
        var y = new double[Size];
        for (int i = 0; i < Size; i++)
        {
            y[_place[i]] = right[i];
        }

        Forward(y);
        Backward(y);
        var x = new double[Size];
        for (int i = 0; i < Size; i++)
        {
            x[i] = y[_place[i]];
        }

        return x;
    }

    /// <summary>
    /// x = L⁻ᵀ z: for independent standard normal z a draw from the normal distribution of covariance A⁻¹.
    /// </summary>
    public double[] Colour(ReadOnlySpan<double> white)
    {
        Preconditions.SameLength(white.Length, Size);
        double[] y = white.ToArray();
        Backward(y);
        return [.. _place.Select(p => y[p])];
    }

    /// <summary>The diagonal of A⁻¹.</summary>
    public double[] InverseDiagonal()
    {
        var inverse = new double[_band.Length];
        for (int j = Size - 1; j >= 0; j--)
        {
            int last = Math.Min(Size - 1, j + _width);
            for (int i = last; i > j; i--)
            {
                inverse[At(i, j)] = -Sum(inverse, j, last, i) / _band[At(j, j)];
            }

            inverse[At(j, j)] = ((1 / _band[At(j, j)]) - Sum(inverse, j, last, j)) / _band[At(j, j)];
        }

        return [.. _place.Select(p => inverse[At(p, p)])];
    }

    internal void Set(int i, int j, double value)
    {
        if (i >= j)
        {
            _band[At(i, j)] = value;
        }
    }

    internal void Decompose()
    {
        for (int j = 0; j < Size; j++)
        {
            double pivot = _band[At(j, j)] - Dot(j, j);
            if (!(pivot > 0))
            {
                throw new LinearAlgebraException("banded Cholesky factorisation", j + 1);
            }

            double root = Math.Sqrt(pivot);
            _band[At(j, j)] = root;
            for (int i = j + 1; i <= Math.Min(Size - 1, j + _width); i++)
            {
                _band[At(i, j)] = (_band[At(i, j)] - Dot(i, j)) / root;
            }
        }
    }

    // Row i of L holds columns i − w … i.
    private int At(int i, int j) => (i * (_width + 1)) + j - i + _width;

    private double Dot(int i, int j)
    {
        double sum = 0;
        for (int k = Math.Max(0, i - _width); k < j; k++)
        {
            sum += _band[At(i, k)] * _band[At(j, k)];
        }

        return sum;
    }

    // Σ_{k > j} L[k, j] Z[k, i], Z the inverse so far.
    private double Sum(double[] inverse, int j, int last, int i)
    {
        double sum = 0;
        for (int k = j + 1; k <= last; k++)
        {
            sum += _band[At(k, j)] * inverse[k >= i ? At(k, i) : At(i, k)];
        }

        return sum;
    }

    private void Forward(double[] y)
    {
        for (int i = 0; i < Size; i++)
        {
            for (int k = Math.Max(0, i - _width); k < i; k++)
            {
                y[i] -= _band[At(i, k)] * y[k];
            }

            y[i] /= _band[At(i, i)];
        }
    }

    private void Backward(double[] y)
    {
        for (int i = Size - 1; i >= 0; i--)
        {
            y[i] /= _band[At(i, i)];
            for (int k = Math.Max(0, i - _width); k < i; k++)
            {
                y[k] -= _band[At(i, k)] * y[i];
            }
        }
    }
}
