using System.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Transforms;
using TmLab.Quantities;

namespace TmLab.Measurement.Bases;

/// <summary>
/// Plane waves over the grid N1 × N2: pattern k = k1 N2 + k2, B[(k1,k2),(n1,n2)] = exp(2πi (k1 n1 / N1 + k2 n2 / N2)). As B B† = N,
/// T = D B* / N: two passes of fast Fourier transforms.
/// </summary>
public sealed class FourierBasis : IPatternBasis
{
    private readonly GridShape _grid;
    private readonly FourierPlan _alongRows;
    private readonly FourierPlan _alongColumns;

    /// <summary>Makes the basis over a grid of any size.</summary>
    public FourierBasis(GridShape grid)
    {
        _grid = grid;
        _alongRows = new FourierPlan(grid.Columns, FourierSign.Negative);
        _alongColumns = new FourierPlan(grid.Rows, FourierSign.Negative);
    }

    /// <inheritdoc/>
    public int PatternCount => _grid.Count;

    /// <inheritdoc/>
    public int ModeCount => _grid.Count;

    /// <inheritdoc/>
    public double InversionScale => 1.0 / _grid.Count;

    /// <inheritdoc/>
    public double PatternEnergy(int pattern) => ModeCount;

    /// <inheritdoc/>
    public int PlaneRow(int pattern) => pattern;

    /// <inheritdoc/>
    public Complex Element(int pattern, int mode)
    {
        (int k1, int k2) = Math.DivRem(pattern, _grid.Columns);
        (int n1, int n2) = Math.DivRem(mode, _grid.Columns);
        double turns = ((double)((long)k1 * n1 % _grid.Rows) / _grid.Rows) + ((double)((long)k2 * n2 % _grid.Columns) / _grid.Columns);
        return Complex.FromPolarCoordinates(1, 2 * Math.PI * turns);
    }

    /// <inheritdoc/>
    public void Invert(in ModePlanes planes)
    {
        int row = _grid.Columns * planes.Lanes;
        _alongColumns.Transform(planes.Real, planes.Imaginary, planes.ScratchReal, planes.ScratchImaginary, row);
        for (int start = 0; start < planes.Real.Length; start += row)
        {
            _alongRows.Transform(
                planes.Real.Slice(start, row),
                planes.Imaginary.Slice(start, row),
                planes.ScratchReal.Slice(start, row),
                planes.ScratchImaginary.Slice(start, row),
                planes.Lanes);
        }
    }

    /// <inheritdoc/>
    public double NoiseVariance(int mode, ReadOnlySpan<double> columnVariance) =>
        UnitaryNoise.Variance(columnVariance);
}
