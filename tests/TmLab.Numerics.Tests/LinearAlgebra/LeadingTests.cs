using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

/// <summary>The randomised search: its bounds hold, and it finds what the exact routes find.</summary>
public sealed class LeadingTests
{
    private static readonly SpectrumOptions s_randomised =
        new() { TileBytes = 20_000, PreferGramWhenCheaper = false, Oversampling = 4, MaximumPasses = 6 };

    public static TheoryData<EngineChoice> Choices => [EngineChoice.Managed, EngineChoice.Native];

    [Theory]
    [MemberData(nameof(Choices))]
    public void A_decaying_spectrum_is_found_to_the_accuracy_asked_for(EngineChoice choice)
    {
        double[] values = [.. Enumerable.Range(0, 60).Select(k => 10 * Math.Exp(-0.1 * k))];
        InMemoryMatrix matrix = Dense.Reader(Dense.WithSpectrum(200, values, 51));
        ILinearAlgebraEngine engine = Engines.Get(choice);
        using SingularVectors found = Tall.Leading(matrix, 6, engine, s_randomised);
        Assert.Equal(SpectrumMethod.Randomised, found.Spectrum.Method);
        for (int k = 0; k < 6; k++)
        {
            Assert.True(found.Spectrum.ErrorBounds[k] <= s_randomised.RandomisedAccuracy * values[k]);

            // Ritz values err by the square of the residual; single-precision products leave 1e-6.
            Assert.Equal(values[k], found.Spectrum.SingularValues[k], 1e-6 * values[0]);
        }

        var u = new InMemoryMatrix(200, 6);
        OutputVectorCheck check = Tall.Write(matrix, found, u, engine, s_randomised);
        Assert.True(check.DiagonalError < 1e-5, $"{check}");
    }

    [Theory]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(4)]
    public void Bounds_hold_and_values_stay_below_the_true_ones_on_a_flat_spectrum(int passes)
    {
        Complex[,] a = Dense.Random(300, 80, 52);
        InMemoryMatrix matrix = Dense.Reader(a);
        ILinearAlgebraEngine engine = Engines.Get(EngineChoice.Auto);
        SpectrumOutcome exact = Tall.Values(matrix, engine);
        using SingularVectors found = Tall.Leading(matrix, 8, engine, s_randomised with { MaximumPasses = passes });
        Assert.Equal(passes, found.Spectrum.Passes);
        double rounding = 1e-6 * exact.SingularValues[0];
        for (int k = 0; k < 8; k++)
        {
            double value = found.Spectrum.SingularValues[k], bound = found.Spectrum.ErrorBounds[k];
            Assert.True(value <= exact.SingularValues[k] + rounding);
            Assert.True(exact.SingularValues.Min(s => Math.Abs(s - value)) <= bound + rounding);

            // The bound says something: it is not larger than the spectrum is wide.
            Assert.True(bound < exact.SingularValues[0]);
        }
    }

    [Fact]
    public void A_wide_matrix_is_searched_too()
    {
        double[] values = [9, 7, 5, 1, 0.9, 0.8, 0.7, 0.6, 0.5, 0.4];
        Complex[,] a = Dense.Adjoint(Dense.WithSpectrum(50, values, 53));
        using SingularVectors found = Tall.Leading(Dense.Reader(a), 3, Engines.Get(EngineChoice.Auto), s_randomised);
        Assert.Equal(50, found.InputVectors.Rows);
        Assert.Equal(9, found.Spectrum.SingularValues[0], 1e-5);
        Assert.Equal(5, found.Spectrum.SingularValues[2], 1e-5);
    }

    [Fact]
    public void A_matrix_of_less_rank_than_the_channels_asked_for_ends_early()
    {
        double[] values = [4, 2, .. Enumerable.Repeat(0.0, 28)];
        using SingularVectors found = Tall.Leading(
            Dense.Reader(Dense.WithSpectrum(100, values, 54)), 5, Engines.Get(EngineChoice.Auto), s_randomised);
        Assert.Equal(4, found.Spectrum.SingularValues[0], 1e-5);
        Assert.Equal(2, found.Spectrum.SingularValues[1], 1e-5);
        Assert.True(found.Spectrum.SingularValues[2] < 1e-2);
        Assert.True(found.Spectrum.Passes <= 6);
    }

    [Fact]
    public void The_Gram_matrix_is_preferred_where_it_is_cheaper()
    {
        InMemoryMatrix matrix = Dense.Reader(Dense.Random(300, 80, 55));
        ILinearAlgebraEngine engine = Engines.Get(EngineChoice.Auto);
        using SingularVectors found = Tall.Leading(matrix, 8, engine);
        Assert.Equal(SpectrumMethod.Gram, found.Spectrum.Method);
        Assert.Equal(8, found.Spectrum.SingularValues.Length);
        Assert.Throws<ArgumentOutOfRangeException>(() => Tall.Leading(matrix, 81, engine));
        Assert.Throws<ArgumentOutOfRangeException>(() => Tall.Leading(matrix, 0, engine));
    }
}
