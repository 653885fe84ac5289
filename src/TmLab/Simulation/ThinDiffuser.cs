using TmLab.Numerics;

namespace TmLab.Simulation;

/// <summary>
/// A diffuser so thin that light leaves it near the place where it entered: between positions on its two faces the matrix is
/// independent Gaussian under an envelope of finite width, and the camera stands in the far field of the exit face. Tilting the
/// light on the modulator by a phase ramp of q radians a macro-pixel along rows or columns then shifts the speckle and changes
/// it little: the angular memory effect, C(q) = [qL / sinh qL]² (Feng, Kane, Lee, Stone, Phys. Rev. Lett. 61, 834 (1988)).
/// </summary>
/// <param name="ThicknessMacroPixels">
/// L in units of a macro-pixel's width on the diffuser, 0.5 … 1000; C falls to ½ at q = 1.4914 / L. The exit face spans the grid.
/// </param>
/// <remarks>
/// C is the squared Fourier transform of the envelope P of the spread light. Taken along each axis as
/// P(x) = (π/4L) / cosh²(πx/2L), its transform is qL / sinh qL exactly.
/// </remarks>
public sealed record ThinDiffuser(double ThicknessMacroPixels) : Medium
{
    /// <inheritdoc/>
    internal override bool OutputIsIsotropic => false;

    /// <inheritdoc/>
    internal override double Draw(
        MediumShape shape, RandomStreams streams, int realisation, ParallelOptions options, FieldPlanes target)
    {
        Preconditions.InRange(ThicknessMacroPixels, 0.5, 1000);
        double[][] alongY = SpreadAlong(shape.Grid.Rows, shape.Pupil.RowCount);
        double[][] alongX = SpreadAlong(shape.Grid.Columns, shape.Pupil.ColumnCount);
        double[] meanSquares = new double[target.Rows];
        Parallel.For(0, target.Rows, options, mode =>
        {
            (int row, int column) = Math.DivRem(mode, shape.Grid.Columns);
            meanSquares[mode] = DrawRow(shape.Pupil, alongY[row], alongX[column], streams, realisation, target, mode);
        });
        return meanSquares.Sum() / target.Rows;
    }

    /// <summary>P(x): the share of light, per macro-pixel's width, that leaves at distance x along one axis from where it entered.</summary>
    internal double Spread(double xMacroPixels)
    {
        double e = PortableMath.Exp(-Math.Min(Math.Abs(xMacroPixels) * Math.PI / (2 * ThicknessMacroPixels), 300));
        double sech = 2 * e / (1 + (e * e));
        return Math.PI / (4 * ThicknessMacroPixels) * sech * sech;
    }

    private static double DrawRow(
        Pupil pupil, double[] alongY, double[] alongX, RandomStreams streams, int realisation, FieldPlanes target, int mode)
    {
        double sum = 0;
        Span<float> re = target.Real(mode);
        Span<float> im = target.Imaginary(mode);
        for (int point = 0; point < re.Length; point++)
        {
            (int y, int x) = pupil.PlaceInRectangle(point);
            double power = alongY[y] * alongX[x];
            double amplitude = Math.Sqrt(power);
            (double a, double b) = streams.ComplexNormal(RandomPurpose.Medium, mode, point, realisation);
            (re[point], im[point]) = ((float)(a * amplitude), (float)(b * amplitude));
            sum += power;
        }

        return sum / re.Length;
    }

    /// <summary>Spread from each macro-pixel's centre (first index) to each of the pupil's points (second index) along one axis.</summary>
    private double[][] SpreadAlong(int macroPixels, int points) =>
    [
        .. Enumerable.Range(0, macroPixels).Select(n => Enumerable.Range(0, points)
            .Select(k => Spread(((k + 0.5) / points * macroPixels) - (n + 0.5))).ToArray()),
    ];
}
