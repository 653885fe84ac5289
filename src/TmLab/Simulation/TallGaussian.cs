namespace TmLab.Simulation;

/// <summary>A tall matrix X of independent circular complex normal elements, stored by columns, and its weighted Gram matrices.</summary>
internal sealed class TallGaussian
{
    private readonly double[][] _re;
    private readonly double[][] _im;

    private TallGaussian(int columns)
    {
        _re = new double[columns][];
        _im = new double[columns][];
    }

    /// <summary>Draws X, rows × columns.</summary>
    public static TallGaussian Draw(RandomStreams streams, int variant, int rows, int columns, ParallelOptions options)
    {
        var matrix = new TallGaussian(columns);
        Parallel.For(0, columns, options, column =>
        {
            (matrix._re[column], matrix._im[column]) = (new double[rows], new double[rows]);
            for (int row = 0; row < rows; row++)
            {
                (matrix._re[column][row], matrix._im[column][row]) = streams.ComplexNormal(RandomPurpose.SlabBasis, column, row, variant);
            }
        });
        return matrix;
    }

    /// <summary>Real parts of a row, a copy.</summary>
    public double[] RowReal(int row) => [.. _re.Select(column => column[row])];

    /// <summary>Imaginary parts of a row, a copy.</summary>
    public double[] RowImaginary(int row) => [.. _im.Select(column => column[row])];

    /// <summary>X† diag(weights) X; only the lower triangle is filled.</summary>
    public HermitianFactor Gram(double[] weights, ParallelOptions options)
    {
        var gram = new HermitianFactor(_re.Length);
        Parallel.For(0, _re.Length, options, i =>
        {
            for (int j = 0; j <= i; j++)
            {
                (gram.Real[i][j], gram.Imaginary[i][j]) = Product(i, j, weights);
            }
        });
        return gram;
    }

    private (double Real, double Imaginary) Product(int i, int j, double[] weights)
    {
        double re = 0;
        double im = 0;
        double[] ar = _re[i];
        double[] ai = _im[i];
        double[] br = _re[j];
        double[] bi = _im[j];
        for (int m = 0; m < weights.Length; m++)
        {
            re += weights[m] * ((ar[m] * br[m]) + (ai[m] * bi[m]));
            im += weights[m] * ((ar[m] * bi[m]) - (ai[m] * br[m]));
        }

        return (re, im);
    }
}
