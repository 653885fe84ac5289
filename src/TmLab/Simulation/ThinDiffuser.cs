using TmLab.Numerics;
using TmLab.Quantities;

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
        double[] meanSquares = new double[target.Rows];
        Parallel.For(0, target.Rows, options, mode => meanSquares[mode] = DrawRow(shape, streams, realisation, target, mode));
        return meanSquares.Sum() / target.Rows;
    }

    /// <summary>Share of the light that leaves a macro-pixels' width at distance x from where it entered.</summary>
    internal double Spread(double xMacroPixels)
    {
        double e = PortableMath.Exp(-Math.Min(Math.Abs(xMacroPixels) * Math.PI / (2 * ThicknessMacroPixels), 300));
        double sech = 2 * e / (1 + (e * e));
        return Math.PI / (4 * ThicknessMacroPixels) * sech * sech;
    }

    private double DrawRow(MediumShape shape, RandomStreams streams, int realisation, FieldPlanes target, int mode)
    {
        double sum = 0;
        for (int point = 0; point < target.Columns; point++)
        {
            double power = SpreadBetween(shape, mode, point);
            (double re, double im) = streams.ComplexNormal(RandomPurpose.Medium, mode, point, realisation);
            target.Real(mode)[point] = (float)(re * Math.Sqrt(power));
            target.Imaginary(mode)[point] = (float)(im * Math.Sqrt(power));
            sum += power;
        }

        return sum / target.Columns;
    }

    private double SpreadBetween(MediumShape shape, int mode, int point)
    {
        GridShape grid = shape.Grid;
        (double y, double x) = shape.Pupil.RelativePosition(point);
        (int row, int column) = Math.DivRem(mode, grid.Columns);
        return Spread((y * grid.Rows) - (row + 0.5)) * Spread((x * grid.Columns) - (column + 0.5));
    }
}
