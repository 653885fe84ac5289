using CsCheck;
using TmLab.Measurement;
using TmLab.Shaping;
using Xunit;

namespace TmLab.Tests.Shaping;

public sealed class GrayScaleTests
{
    [Fact]
    public void Without_a_table_grey_is_the_phase_in_256ths_of_a_turn_rounded_and_wrapped() =>
        Gen.Double[-20, 20].Sample(phase =>
        {
            double turns = phase / (2 * Math.PI);
            int expected = (int)Math.Round((turns - Math.Floor(turns)) * 256) % 256;
            (byte gray, double shown) = new GrayScale(null).Nearest(phase);
            Assert.Equal(expected, gray);
            Assert.Equal(2 * Math.PI * gray / 256, shown, 1e-12);
        });

    [Fact]
    public void With_a_table_the_level_is_the_one_whose_tabled_phase_is_nearest_on_the_circle()
    {
        // A panel whose response bends: phase = 2.2π (g/255)².
        int[] gray = [.. Enumerable.Range(0, 18).Select(i => 15 * i)];
        var table = new GrayPhaseTable([.. gray], [.. gray.Select(g => 2.2 * Math.PI * g * g / (255.0 * 255))]);
        var scale = new GrayScale(table);
        Gen.Double[-10, 10].Sample(phase =>
        {
            (byte g, double shown) = scale.Nearest(phase);
            double error = Math.Abs(Math.IEEERemainder(shown - phase, 2 * Math.PI));
            // The steepest step between neighbouring levels is 2.2π · 2/255; half of it is the worst that rounding can do.
            Assert.InRange(error, 0, 2.2 * Math.PI / 255);
            double below = table.PhaseRad[g / 15], above = table.PhaseRad[Math.Min((g / 15) + 1, 17)];
            Assert.InRange(shown, below, above);
        });
    }
}
