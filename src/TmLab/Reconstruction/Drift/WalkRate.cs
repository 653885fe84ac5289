using TmLab.Numerics.LinearAlgebra;

namespace TmLab.Reconstruction.Drift;

/// <summary>The phase increments from step to step inside one group.</summary>
/// <param name="Increment">One a step but the first, radians.</param>
/// <param name="Covariance">Of their measuring noise, rad².</param>
/// <param name="Seconds">How long each took.</param>
internal sealed record GroupIncrements(double[] Increment, double[,] Covariance, double[] Seconds);

/// <summary>
/// The variance rate q of a random walk from noisy increments: maximum likelihood for y ~ N(m, q Δt + C), m common to all groups (an error
/// of the steps), by Fisher scoring. Increments that are poorly measured count for little.
/// </summary>
internal static class WalkRate
{
    private const int Iterations = 12;

    /// <summary>q, rad²/s, not below zero; zero without increments.</summary>
    public static double Estimate(IReadOnlyList<GroupIncrements> groups)
    {
        int n = groups.Count == 0 ? 0 : groups.Max(g => g.Increment.Length);
        GroupIncrements[] whole = [.. groups.Where(g => g.Increment.Length == n && g.Seconds.All(s => s > 0))];
        if (n == 0 || whole.Length < 2)
        {
            return 0;
        }

        double rate = whole.Average(g => g.Increment.Select((y, i) => y * y / g.Seconds[i]).Average());
        for (int i = 0; i < Iterations; i++)
        {
            rate = Math.Max(Improve(whole, n, rate), 1e-12);
        }

        // The common mean has cost one group's freedom.
        return rate <= 1e-12 ? 0 : rate * whole.Length / (whole.Length - 1.0);
    }

    private static double Improve(GroupIncrements[] groups, int n, double rate)
    {
        double[][,] weights = [.. groups.Select(g => SmallSymmetric.Inverse(Total(g, n, rate)))];
        double[] mean = Mean(groups, weights, n);
        double score = 0, information = 0;
        for (int k = 0; k < groups.Length; k++)
        {
            double[,] w = weights[k];
            double[] seconds = groups[k].Seconds;
            for (int i = 0; i < n; i++)
            {
                double weighted = 0;
                for (int j = 0; j < n; j++)
                {
                    weighted += w[i, j] * (groups[k].Increment[j] - mean[j]);
                    information += w[i, j] * w[i, j] * seconds[i] * seconds[j];
                }

                score += seconds[i] * ((weighted * weighted) - w[i, i]);
            }
        }

        return rate + (score / information);
    }

    private static double[,] Total(GroupIncrements group, int n, double rate)
    {
        var total = (double[,])group.Covariance.Clone();
        for (int i = 0; i < n; i++)
        {
            total[i, i] += (rate * group.Seconds[i]) + 1e-12;
        }

        return total;
    }

    private static double[] Mean(GroupIncrements[] groups, double[][,] weights, int n)
    {
        var sum = new double[n, n];
        var right = new double[n];
        for (int k = 0; k < groups.Length; k++)
        {
            for (int i = 0; i < n; i++)
            {
                for (int j = 0; j < n; j++)
                {
                    sum[i, j] += weights[k][i, j];
                    right[i] += weights[k][i, j] * groups[k].Increment[j];
                }
            }
        }

        return SmallSymmetric.Solve(sum, right);
    }
}
