using System.Collections.Immutable;
using System.Numerics;
using CsCheck;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using Xunit;

namespace TmLab.Tests.Measurement;

public sealed class PatternBasisTests
{
    private static readonly ImmutableArray<Complex> Custom = DrawPatterns(10, 6, 8);

    public static TheoryData<string> Bases => [.. All.Keys];

    private static Dictionary<string, IPatternBasis> All => new()
    {
        ["hadamard"] = new HadamardBasis(16, HadamardOrdering.Natural),
        ["hadamard sequency"] = new HadamardBasis(32, HadamardOrdering.Sequency),
        ["hadamard of one mode"] = new HadamardBasis(1, HadamardOrdering.Natural),
        ["binary"] = new HadamardBinaryBasis(16, HadamardOrdering.Natural),
        ["binary sequency"] = new HadamardBinaryBasis(8, HadamardOrdering.Sequency),
        ["fourier"] = new FourierBasis(new GridShape(4, 4)),
        ["fourier of an odd grid"] = new FourierBasis(new GridShape(3, 5)),
        ["pixel"] = new PixelBasis(7),
        ["custom"] = new CustomBasis(10, 6, Custom),
    };

    [Theory]
    [MemberData(nameof(Bases))]
    public void Inverting_the_columns_of_T_times_B_transposed_gives_T_back(string name)
    {
        IPatternBasis basis = All[name];
        Gen.Int.Sample(seed => RoundTrip(basis, new Random(seed)), iter: 20);
    }

    [Theory]
    [MemberData(nameof(Bases))]
    public void Noise_of_unit_columns_comes_out_with_the_stated_variance(string name)
    {
        IPatternBasis basis = All[name];
        double[] variance = [.. Enumerable.Range(0, basis.PatternCount).Select(k => 1 + (0.5 * k / basis.PatternCount))];
        for (int mode = 0; mode < basis.ModeCount; mode++)
        {
            // T[n] = Σ_k g_k D_k is linear: the gains g_k come from unit columns.
            double exact = 0;
            for (int k = 0; k < basis.PatternCount; k++)
            {
                Complex gain = Invert(basis, j => j == k ? 1 : 0)[mode];
                exact += variance[k] * gain.Magnitude * gain.Magnitude;
            }

            Assert.Equal(exact, basis.NoiseVariance(mode, variance), exact * 1e-5);
        }
    }

    [Theory]
    [MemberData(nameof(Bases))]
    public void The_plane_rows_are_a_permutation(string name)
    {
        IPatternBasis basis = All[name];
        Assert.Equal(Enumerable.Range(0, basis.PatternCount), Enumerable.Range(0, basis.PatternCount).Select(basis.PlaneRow).Order());
    }

    [Fact]
    public void Dependent_custom_patterns_have_an_infinite_or_huge_condition()
    {
        ImmutableArray<Complex> patterns = [1, 2, 2, 4, 3, 6];
        Assert.True(new CustomBasis(3, 2, patterns).Condition > CustomBasis.LargestCondition);
    }

    private static void RoundTrip(IPatternBasis basis, Random random)
    {
        Complex[] t = [.. Enumerable.Range(0, basis.ModeCount).Select(_ => new Complex(random.NextDouble() - 0.5, random.NextDouble() - 0.5))];
        Complex[] back = Invert(basis, k =>
        {
            Complex column = 0;
            for (int n = 0; n < t.Length; n++)
            {
                column += basis.Element(k, n) * t[n];
            }

            return column;
        });
        // Single precision with a few dozen operations; the custom patterns' condition is below 100.
        Assert.All(Enumerable.Range(0, t.Length), n => Assert.True((t[n] - back[n]).Magnitude < 1e-4));
    }

    private static Complex[] Invert(IPatternBasis basis, Func<int, Complex> column)
    {
        int lanes = ModePlanes.LaneMultiple, size = basis.PatternCount * lanes;
        var planes = new ModePlanes(basis.PatternCount, lanes, new float[size], new float[size], new float[size], new float[size]);
        for (int k = 0; k < basis.PatternCount; k++)
        {
            Complex value = column(k);
            planes.RealRow(basis.PlaneRow(k)).Fill((float)value.Real);
            planes.ImaginaryRow(basis.PlaneRow(k)).Fill((float)value.Imaginary);
        }

        basis.Invert(planes);
        var result = new Complex[basis.ModeCount];
        for (int n = 0; n < result.Length; n++)
        {
            result[n] = new Complex(planes.RealRow(n)[lanes - 1], planes.ImaginaryRow(n)[lanes - 1]) * basis.InversionScale;
        }

        return result;
    }

    private static ImmutableArray<Complex> DrawPatterns(int rows, int columns, int seed)
    {
        var random = new Random(seed);
        return [.. Enumerable.Range(0, rows * columns).Select(_ => Complex.FromPolarCoordinates(1, 2 * Math.PI * random.NextDouble()))];
    }
}
