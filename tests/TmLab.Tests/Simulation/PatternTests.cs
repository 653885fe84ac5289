using System.Numerics;
using TmLab.Measurement;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

public sealed class PatternTests
{
    [Theory]
    [InlineData(2)]
    [InlineData(4)]
    [InlineData(8)]
    public void Sequency_order_counts_sign_changes(int gridSide)
    {
        ModeDescription modes = Modes(gridSide, BasisKind.Hadamard, HadamardOrdering.Sequency);
        for (int k = 0; k < modes.ModeCount; k++)
        {
            Complex[] row = PatternFields.Row(modes, default, k);
            Assert.Equal(k, row.Skip(1).Zip(row, (a, b) => a == b ? 0 : 1).Sum());
        }
    }

    [Theory]
    [InlineData(BasisKind.Hadamard, HadamardOrdering.Natural)]
    [InlineData(BasisKind.Hadamard, HadamardOrdering.Sequency)]
    [InlineData(BasisKind.HadamardBinary, HadamardOrdering.Natural)]
    [InlineData(BasisKind.HadamardBinary, HadamardOrdering.Sequency)]
    [InlineData(BasisKind.Fourier, HadamardOrdering.Natural)]
    public void Fast_fields_are_the_product_with_the_defined_patterns(BasisKind basis, HadamardOrdering ordering)
    {
        ModeDescription modes = Modes(8, basis, ordering);
        using FieldPlanes transmission = Random(64, 19);
        using FieldPlanes fields = PatternFields.Compute(modes, default, transmission, new ParallelOptions());
        for (int k = 0; k < 64; k++)
        {
            Complex[] row = PatternFields.Row(modes, default, k);
            for (int p = 0; p < 19; p++)
            {
                Complex sum = 0;
                for (int n = 0; n < 64; n++)
                {
                    sum += row[n] * new Complex(transmission.Real(n)[p], transmission.Imaginary(n)[p]);
                }

                // 64 terms near 1 in single precision: 64 × 6e-8, with room for the six passes of the fast transform.
                Assert.InRange((sum - new Complex(fields.Real(k)[p], fields.Imaginary(k)[p])).Magnitude, 0, 2e-5);
            }
        }
    }

    private static ModeDescription Modes(int gridSide, BasisKind basis, HadamardOrdering ordering) =>
        Benches.Manifest(8, gridSide, basis, ordering: ordering).Modes;

    private static FieldPlanes Random(int rows, int columns)
    {
        var streams = new RandomStreams(12);
        var planes = new FieldPlanes(rows, columns);
        for (int n = 0; n < rows; n++)
        {
            for (int p = 0; p < columns; p++)
            {
                planes.Real(n)[p] = (float)streams.Normal(RandomPurpose.Medium, n, p);
                planes.Imaginary(n)[p] = (float)streams.Normal(RandomPurpose.Reference, n, p);
            }
        }

        return planes;
    }
}
