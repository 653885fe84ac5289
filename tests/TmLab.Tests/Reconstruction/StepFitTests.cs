using System.Numerics;
using CsCheck;
using TmLab.Reconstruction;
using Xunit;

namespace TmLab.Tests.Reconstruction;

public sealed class StepFitTests
{
    [Fact]
    public void Any_distinct_steps_give_background_and_field_back_exactly() =>
        Gen.Int[3, 9].Select(Gen.Int).Sample((steps, seed) =>
        {
            var random = new Random(seed);
            // A spread of at least ±0.2 of a step keeps the fit well posed.
            double[] theta = [.. Enumerable.Range(0, steps).Select(s => (2 * Math.PI * s / steps) + ((random.NextDouble() - 0.5) * 0.4))];
            double a = 1 + random.NextDouble();
            Complex d = Complex.FromPolarCoordinates(random.NextDouble(), 7 * random.NextDouble());
            StepFit fit = StepFit.TryCreate(theta)!;
            double[] intensity = [.. Enumerable.Range(0, steps).Select(s => fit.Model(s, a, d))];
            Complex field = 0;
            double background = 0;
            for (int s = 0; s < steps; s++)
            {
                field += fit.Field[s] * intensity[s];
                background += fit.Background[s] * intensity[s];
            }

            Assert.Equal(a, background, 1e-12);
            Assert.True((field - d).Magnitude < 1e-12);
            Assert.True(fit.Field.Aggregate(Complex.Zero, (sum, w) => sum + w).Magnitude < 1e-13);
        }, iter: 500);

    // The N-step formula D = (1/N) Σ I e^{−iδ}: Schwider et al., Appl. Opt. 22, 3421 (1983), as in the reference list [C].
    [Theory]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(5)]
    [InlineData(8)]
    public void For_equal_steps_the_weights_are_those_of_the_N_step_formula(int steps)
    {
        double[] theta = [.. Enumerable.Range(0, steps).Select(s => 2 * Math.PI * s / steps)];
        StepFit fit = StepFit.TryCreate(theta)!;
        for (int s = 0; s < steps; s++)
        {
            Assert.True((fit.Field[s] - (Complex.FromPolarCoordinates(1, -theta[s]) / steps)).Magnitude < 1e-14);
            Assert.Equal(1.0 / steps, fit.Background[s], 1e-14);
        }

        Assert.Equal(1.0 / steps, fit.FieldVariance, 1e-14);
    }

    [Fact]
    public void Steps_that_do_not_determine_the_field_have_no_fit()
    {
        Assert.Null(StepFit.TryCreate([0, Math.PI, 0, Math.PI]));
        Assert.Null(StepFit.TryCreate([1, 1, 1]));
        Assert.Null(StepFit.TryCreate([0, 2]));
    }
}
