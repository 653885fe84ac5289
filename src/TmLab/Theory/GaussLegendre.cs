using TmLab.Numerics;

namespace TmLab.Theory;

/// <summary>Nodes and weights of Gauss–Legendre quadrature, by Newton's iteration on P_n from the asymptotic roots (Abramowitz and Stegun 25.4.29, 22.16.6).</summary>
internal static class GaussLegendre
{
    /// <summary>The rule of n nodes on [low, high].</summary>
    public static (double[] Nodes, double[] Weights) Rule(int count, double low, double high)
    {
        Preconditions.InRange(count, 1, 10_000);
        var nodes = new double[count];
        var weights = new double[count];
        for (int k = 0; k < count; k++)
        {
            double x = Math.Cos(Math.PI * (k + 0.75) / (count + 0.5)), slope = 0;
            for (int iteration = 0; iteration < 20; iteration++)
            {
                (double value, slope) = Legendre(count, x);
                x -= value / slope;
            }

            nodes[k] = (low + high - ((high - low) * x)) / 2;
            weights[k] = (high - low) / ((1 - (x * x)) * slope * slope);
        }

        return (nodes, weights);
    }

    private static (double Value, double Slope) Legendre(int order, double x)
    {
        double before = 1, value = x;
        for (int k = 2; k <= order; k++)
        {
            (before, value) = (value, ((((2 * k) - 1) * x * value) - ((k - 1) * before)) / k);
        }

        return (value, order * ((x * value) - before) / ((x * x) - 1));
    }
}
