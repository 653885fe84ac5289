using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

/// <summary>The camera against EMVA standard 1288, release 4.0 linear: photon transfer, SNR, non-uniformity.</summary>
public sealed class CameraModelTests
{
    private const int Side = 256;
    private const double Pixels = Side * Side;

    private static readonly SimulatedCamera Plain = new()
    {
        ElectronsPerCount = 1 / 2.17, OffsetCounts = 40, ReadNoiseElectrons = 1.6, FullWellElectrons = 1e9, PrnuRelative = 0, DsnuElectrons = 0,
    };

    // SNR(μ) = μ / √(σ_d² + σ_q²/K² + μ) for σ_d = 1.6 e⁻, K = 2.17 DN/e⁻: the four values of the standard's formula. The last uses
    // 1 DN/e⁻ so that 16 bits suffice; its quantisation noise does not reach the fourth digit.
    [Theory]
    [InlineData(10, 2.17, 2.820)]
    [InlineData(100, 2.17, 9.874)]
    [InlineData(1000, 2.17, 31.58)]
    [InlineData(30000, 1, 173.2)]
    public void The_signal_to_noise_ratio_is_that_of_the_standard(double electrons, double countsPerElectron, double expected)
    {
        SimulatedCamera camera = Plain with { ElectronsPerCount = 1 / countsPerElectron };
        (double mean, double variance) = Statistics(Expose(camera, electrons, frame: 1));
        double snr = (mean - camera.OffsetCounts) / Math.Sqrt(variance);
        // Standard error of a standard deviation: √((κ − 1)/4n), kurtosis κ ≤ 3 + 1/μ.
        double relative = 4 * Math.Sqrt((2 + (1 / electrons)) / (4 * Pixels));
        Assert.InRange(snr, expected * (1 - relative - 1e-3), expected * (1 + relative + 1e-3));
    }

    [Theory]
    [InlineData(5, 50)]
    [InlineData(40, 90)]
    [InlineData(500, 5000)]
    public void The_photon_transfer_line_has_the_gain_as_its_slope(double low, double high)
    {
        (double lowMean, double lowVariance) = Statistics(Expose(Plain, low, 2));
        (double highMean, double highVariance) = Statistics(Expose(Plain, high, 3));
        double slope = (highVariance - lowVariance) / (highMean - lowMean);
        double error = Math.Sqrt(2.3 / Pixels) * Math.Sqrt((highVariance * highVariance) + (lowVariance * lowVariance)) / (highMean - lowMean);
        Assert.InRange(slope, 2.17 - (4 * error), 2.17 + (4 * error));
    }

    [Fact]
    public void The_dark_variance_is_read_noise_plus_a_twelfth_of_a_count()
    {
        (double mean, double variance) = Statistics(Expose(Plain, 0, 4));
        double expected = (1.6 * 1.6 * 2.17 * 2.17) + (1 / 12.0);
        Assert.InRange(variance, expected * (1 - (4 * Math.Sqrt(2 / Pixels))), expected * (1 + (4 * Math.Sqrt(2 / Pixels))));
        Assert.InRange(mean, 40 - (4 * Math.Sqrt(expected / Pixels)), 40 + (4 * Math.Sqrt(expected / Pixels)));
    }

    [Theory]
    [InlineData(20)]
    [InlineData(63.9)]
    [InlineData(64.1)]
    public void Light_is_recorded_without_bias_on_both_sides_of_the_switch_to_normal_noise(double electrons)
    {
        (double mean, double variance) = Statistics(Expose(Plain, electrons, 5));
        double bound = 4 * Math.Sqrt(variance / Pixels);
        Assert.InRange(mean, 40 + (2.17 * electrons) - bound, 40 + (2.17 * electrons) + bound);
    }

    [Fact]
    public void Non_uniformities_are_those_asked_for()
    {
        // PRNU_1288 = √(s²_y.50 − s²_y.dark)/(μ_y.50 − μ_y.dark), DSNU_1288 = s_y.dark/K, here without temporal noise.
        SimulatedCamera camera = Plain with { HasShotNoise = false, ReadNoiseElectrons = 0, PrnuRelative = 0.01, DsnuElectrons = 3 };
        (double darkMean, double darkVariance) = Statistics(Expose(camera, 0, 1));
        (double halfMean, double halfVariance) = Statistics(Expose(camera, 15_000, 1));
        double bound = 4 / Math.Sqrt(2 * Pixels);
        Assert.InRange(Math.Sqrt(halfVariance - darkVariance) / (halfMean - darkMean), 0.01 * (1 - bound), 0.01 * (1 + bound));
        Assert.InRange(Math.Sqrt(darkVariance - (1 / 12.0)) / 2.17, 3 * (1 - bound), 3 * (1 + bound));
    }

    [Fact]
    public void Counts_end_at_the_full_well_and_at_the_bit_depth()
    {
        SimulatedCamera well = Plain with { ElectronsPerCount = 10, FullWellElectrons = 20_000, ReadNoiseElectrons = 0 };
        Assert.All(Expose(well, 30_000, 1, bitDepth: 12), c => Assert.Equal(2040, c));
        Assert.All(Expose(well with { FullWellElectrons = 1e6 }, 50_000, 1, bitDepth: 12), c => Assert.Equal(4095, c));
        Assert.All(Expose(well with { OffsetCounts = 0, ReadNoiseElectrons = 30 }, 0, 1, bitDepth: 12), c => Assert.InRange(c, 0, 30));
    }

    [Fact]
    public void Defective_pixels_are_as_many_as_asked_for_and_behave_so()
    {
        SimulatedCamera camera = Plain with { DeadPixelCount = 5, HotPixelCount = 4, ReadNoiseElectrons = 0 };
        var model = new CameraModel(camera, new ImageSize(Side, Side), 12, new RandomStreams(1));
        ushort[] counts = Expose(model, 500, 1);
        Assert.Equal(5, model.DeadPixels.Distinct().Count());
        Assert.Equal(4, model.HotPixels.Except(model.DeadPixels).Count());
        Assert.All(model.DeadPixels, p => Assert.Equal(40, counts[p]));
        Assert.All(model.HotPixels, p => Assert.Equal(4095, counts[p]));
        Assert.Equal(5, counts.Count(c => c == 40));
        Assert.Equal(4, counts.Count(c => c == 4095));
    }

    [Fact]
    public void Stray_light_saturates_its_region_and_nothing_else()
    {
        var region = new PixelRectangle(3, 5, 6, 2);
        MeasurementManifest manifest = Benches.Manifest(16, 4, bitDepth: 12);
        Schedule schedule = Benches.Schedule(16);
        using VirtualBench stray = Benches.Create(new BenchSettings { Stray = new StrayLight(region, 1e6) }, manifest, schedule);
        using VirtualBench clean = Benches.Create(new BenchSettings(), manifest, schedule);
        int place = schedule.Frames.First(f => f.Role == FrameRole.Mode).Index;
        ushort[] with = Benches.Frame(stray, place);
        ushort[] without = Benches.Frame(clean, place);
        for (int p = 0; p < with.Length; p++)
        {
            bool inside = p % 16 is >= 3 and < 9 && p / 16 is (5 or 6);
            // A full well of 30,000 electrons at 7.5 a count, plus the offset of 64: 4064 counts.
            Assert.True(inside ? with[p] >= 4060 : with[p] == without[p]);
        }
    }

    private static ushort[] Expose(SimulatedCamera camera, double electrons, int frame, int bitDepth = 16) =>
        Expose(new CameraModel(camera, new ImageSize(Side, Side), bitDepth, new RandomStreams(99)), electrons, frame);

    private static ushort[] Expose(CameraModel model, double electrons, int frame)
    {
        var counts = new ushort[Side * Side];
        model.Expose(Enumerable.Repeat((float)electrons, counts.Length).ToArray(), frame, counts);
        return counts;
    }

    private static (double Mean, double Variance) Statistics(ushort[] counts)
    {
        double mean = counts.Average(c => (double)c);
        return (mean, counts.Average(c => (c - mean) * (c - mean)));
    }
}
