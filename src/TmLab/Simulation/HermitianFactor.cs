using TmLab.Failures;

namespace TmLab.Simulation;

/// <summary>The lower triangle of a small complex matrix: a Hermitian one, or its Cholesky factor L with real positive diagonal.</summary>
internal sealed class HermitianFactor
{
    public HermitianFactor(int size)
    {
        Real = [.. Enumerable.Range(1, size).Select(length => new double[length])];
        Imaginary = [.. Enumerable.Range(1, size).Select(length => new double[length])];
    }

    public double[][] Real { get; }

    public double[][] Imaginary { get; }

    private int Size => Real.Length;

    /// <summary>L with L L† = the Hermitian matrix (Golub and Van Loan, Matrix Computations, §4.2).</summary>
    public static HermitianFactor Cholesky(HermitianFactor matrix)
    {
        var factor = new HermitianFactor(matrix.Size);
        for (int i = 0; i < matrix.Size; i++)
        {
            for (int j = 0; j < i; j++)
            {
                (double re, double im) = factor.Remainder(matrix, i, j);
                factor.Real[i][j] = re / factor.Real[j][j];
                factor.Imaginary[i][j] = im / factor.Real[j][j];
            }

            double pivot = factor.Remainder(matrix, i, i).Real;
            factor.Real[i][i] = pivot > 0
                ? Math.Sqrt(pivot)
                : throw new NumericalException("the simulated slab's channels are linearly dependent", "raise its number of transverse modes");
        }

        return factor;
    }

    /// <summary>L^{-1} G L^{-†} for a Hermitian G, with this as L.</summary>
    public HermitianFactor Whiten(HermitianFactor gram)
    {
        // Rows of G are conjugated columns: solving X L† = G row by row, then L Y = X, whose adjoint is the same solve.
        (double Re, double Im)[][] full = gram.Full();
        foreach ((double Re, double Im)[] row in full)
        {
            SolveInPlace(row);
        }

        var result = new HermitianFactor(Size);
        for (int column = 0; column < Size; column++)
        {
            (double Re, double Im)[] adjoint = [.. full.Select(row => (row[column].Re, -row[column].Im))];
            SolveInPlace(adjoint);
            for (int row = 0; row <= column; row++)
            {
                (result.Real[column][row], result.Imaginary[column][row]) = (adjoint[row].Re, adjoint[row].Im);
            }
        }

        return result;
    }

    /// <summary>Replaces a row vector x by x L^{-†}.</summary>
    public void SolveRowByAdjoint(double[] re, double[] im)
    {
        (double Re, double Im)[] row = [.. re.Zip(im)];
        SolveInPlace(row);
        for (int j = 0; j < row.Length; j++)
        {
            (re[j], im[j]) = row[j];
        }
    }

    /// <summary>Replaces a row vector x by x L†: (x L†)_j = Σ_{i ≤ j} x_i conj(L_ji).</summary>
    public void MultiplyRowByAdjoint(double[] re, double[] im)
    {
        for (int j = Size - 1; j >= 0; j--)
        {
            double sumRe = 0;
            double sumIm = 0;
            for (int i = 0; i <= j; i++)
            {
                sumRe += (re[i] * Real[j][i]) + (im[i] * Imaginary[j][i]);
                sumIm += (im[i] * Real[j][i]) - (re[i] * Imaginary[j][i]);
            }

            (re[j], im[j]) = (sumRe, sumIm);
        }
    }

    /// <summary>y L† = x by forward substitution: y_j = (x_j − Σ_{i&lt;j} y_i conj(L_ji)) / L_jj.</summary>
    private void SolveInPlace((double Re, double Im)[] x)
    {
        for (int j = 0; j < Size; j++)
        {
            (double re, double im) = x[j];
            for (int i = 0; i < j; i++)
            {
                re -= (x[i].Re * Real[j][i]) + (x[i].Im * Imaginary[j][i]);
                im -= (x[i].Im * Real[j][i]) - (x[i].Re * Imaginary[j][i]);
            }

            x[j] = (re / Real[j][j], im / Real[j][j]);
        }
    }

    private (double Real, double Imaginary) Remainder(HermitianFactor matrix, int i, int j)
    {
        double re = matrix.Real[i][j];
        double im = matrix.Imaginary[i][j];
        for (int k = 0; k < j; k++)
        {
            re -= (Real[i][k] * Real[j][k]) + (Imaginary[i][k] * Imaginary[j][k]);
            im -= (Imaginary[i][k] * Real[j][k]) - (Real[i][k] * Imaginary[j][k]);
        }

        return (re, im);
    }

    private (double Re, double Im)[][] Full() =>
    [
        .. Enumerable.Range(0, Size).Select(i => Enumerable.Range(0, Size)
            .Select(j => j <= i ? (Real[i][j], Imaginary[i][j]) : (Real[j][i], -Imaginary[j][i])).ToArray()),
    ];
}
