using CsCheck;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

/// <summary>Against the system's own functions, which are good to about one unit in the last place (2.2e-16).</summary>
public sealed class PortableMathTests
{
    [Fact]
    public void The_logarithm_agrees_over_the_range_of_uniform_numbers() =>
        Gen.Double[-80, 20].Sample(power =>
        {
            double x = Math.Pow(2, power);
            return Math.Abs(PortableMath.Log(x) - Math.Log(x)) <= 1e-15 * (1 + Math.Abs(Math.Log(x)));
        });

    [Fact]
    public void The_exponential_agrees() =>
        Gen.Double[-700, 700].Sample(x => Math.Abs((PortableMath.Exp(x) / Math.Exp(x)) - 1) <= 2e-15);

    [Fact]
    public void Sine_and_cosine_agree() =>
        Gen.Double[-50, 50].Sample(turns =>
        {
            (double sin, double cos) = PortableMath.SinCosTurns(turns);
            double angle = 2 * Math.PI * (turns - Math.Floor(turns));
            return PortableMath.CosTurns(turns) == cos && Math.Abs(sin - Math.Sin(angle)) <= 3e-15 && Math.Abs(cos - Math.Cos(angle)) <= 3e-15;
        });

    [Theory]
    [InlineData(0, 0, 1)]
    [InlineData(0.25, 1, 0)]
    [InlineData(0.5, 0, -1)]
    [InlineData(0.75, -1, 0)]
    public void Quarter_turns_are_exact(double turns, double sin, double cos) =>
        Assert.Equal((sin, cos), PortableMath.SinCosTurns(turns), TupleEquals);

    private static bool TupleEquals((double Sin, double Cos) a, (double Sin, double Cos) b) => a.Sin == b.Sin && a.Cos == b.Cos;
}
