using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Reconstruction;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Multiplexing gain of Hadamard patterns: with noise independent of the signal the mean square error falls by n, the signal-to-noise ratio
/// rises by √n. Harwit and Sloane, Hadamard Transform Optics, Academic Press 1979.
/// </summary>
public sealed class HarwitSloaneTests
{
    [Theory]
    [InlineData(4)]
    [InlineData(64)]
    [InlineData(1024)]
    public void Hadamard_patterns_divide_the_mean_square_error_by_their_number(int n)
    {
        double[] variance = [.. Enumerable.Repeat(1.0, n)];
        Assert.Equal(1.0 / n, new HadamardBasis(n, HadamardOrdering.Natural).NoiseVariance(1, variance), 1e-12);
        Assert.Equal(1, new PixelBasis(n).NoiseVariance(1, variance), 1e-12);
    }

    /// <summary>var φ = (2/N) σ²/B² for N equal steps: Surrel, Appl. Opt. 36, 271 (1997); factors .6667, .5, .4, .25 of the least-squares fit.</summary>
    [Theory]
    [InlineData(3, 0.6667)]
    [InlineData(4, 0.5)]
    [InlineData(5, 0.4)]
    [InlineData(8, 0.25)]
    public void Phase_noise_factors_of_equal_steps_are_those_published(int steps, double factor)
    {
        StepFit fit = StepFit.TryCreate([.. Enumerable.Range(0, steps).Select(s => 2 * Math.PI * s / steps)])!;
        // B = 2|D|; the phase takes half of var D over |D|².
        Assert.Equal(factor, fit.FieldVariance / 2 * 4, 1e-4);
    }

    /// <summary>Four buckets with steps 1 + ε too long: peak-to-valley π ε / 2 of the phase. Schwider et al., Appl. Opt. 22, 3421 (1983).</summary>
    [Theory]
    [InlineData(0.01, 0.01571)]
    [InlineData(0.05, 0.0786)]
    [InlineData(0.1, 0.1576)]
    public void Detuned_steps_give_the_published_phase_error(double detuning, double peakToValley)
    {
        StepFit fit = StepFit.TryCreate([0, Math.PI / 2, Math.PI, 3 * Math.PI / 2])!;
        double[] errors = [.. Enumerable.Range(0, 360).Select(i => Error(2 * Math.PI * i / 360))];
        Assert.Equal(peakToValley, errors.Max() - errors.Min(), 0.02 * peakToValley);

        double Error(double phase)
        {
            System.Numerics.Complex d = 0;
            for (int s = 0; s < 4; s++)
            {
                d += fit.Field[s] * (2 + Math.Cos(phase + (Math.PI / 2 * s * (1 + detuning))));
            }

            double mean = Math.PI / 2 * 1.5 * detuning;
            return Math.IEEERemainder(d.Phase - phase - mean, 2 * Math.PI);
        }
    }
}
