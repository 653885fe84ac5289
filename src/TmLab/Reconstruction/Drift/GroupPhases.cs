using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;

namespace TmLab.Reconstruction.Drift;

/// <summary>The phases of the frames inside every group, found from a sample of pixels. See <see cref="GroupFit"/> for the model.</summary>
internal sealed class GroupPhases
{
    private const int MostRounds = 10;
    private const double ConvergedRad = 2e-4;
    private const int FewestPixels = 32;

    private readonly PixelSample _sample;
    private readonly ReconstructionSettings _settings;
    private double[] _residual = [];

    private GroupPhases(ImmutableArray<StepGroup> groups, ImmutableArray<double> commandedRad, PixelSample sample, ReconstructionSettings settings)
    {
        (_sample, _settings) = (sample, settings);
        Groups = groups;
        Fits = [.. groups.Select(g => new GroupFit([.. g.Frames], [.. g.Frames.Select(f => commandedRad[f])], sample))];
    }

    /// <summary>The groups, modes and trackers, in the order of recording.</summary>
    public ImmutableArray<StepGroup> Groups { get; }

    /// <summary>Each sample pixel's variance of a count about the model, counts²; infinite for pixels that did not serve.</summary>
    public double[] PixelVariance { get; private set; } = [];

    /// <summary>
    /// Each group's squared residual over what the pixels' variance lets expect: 1 for a group like the others, NaN for one that
    /// could not be fitted.
    /// </summary>
    public double[] Misfit { get; private set; } = [];

    /// <summary>One fit a group.</summary>
    public GroupFit[] Fits { get; }

    /// <summary>Finds them; null where there are too few groups or pixels for the model.</summary>
    /// <param name="schedule">The frames.</param>
    /// <param name="commandedRad">The commanded phase of every frame, signed for the stepped arm.</param>
    /// <param name="sample">The counts at some pixels.</param>
    /// <param name="settings">Threads and spreads.</param>
    /// <param name="cancel">Stops the work.</param>
    public static GroupPhases? Find(
        Schedule schedule, ImmutableArray<double> commandedRad, PixelSample sample, ReconstructionSettings settings, CancellationToken cancel)
    {
        var phases = new GroupPhases(schedule.Groups, commandedRad, sample, settings);
        return phases.Run(cancel) ? phases : null;
    }

    /// <summary>Σ_p D_a conj(D_b) over the sample, pixels left out where either is unknown, the two energies, and the number of pixels.</summary>
    public (Complex Overlap, double EnergyA, double EnergyB, int Pixels) Overlap(int a, int b)
    {
        ReadOnlySpan<double> xr = Fits[a].FieldReal, xi = Fits[a].FieldImaginary, yr = Fits[b].FieldReal, yi = Fits[b].FieldImaginary;
        double re = 0, im = 0, energyA = 0, energyB = 0;
        int pixels = 0;
        for (int p = 0; p < xr.Length; p++)
        {
            if (!double.IsNaN(xr[p]) && !double.IsNaN(yr[p]))
            {
                re += (xr[p] * yr[p]) + (xi[p] * yi[p]);
                im += (xi[p] * yr[p]) - (xr[p] * yi[p]);
                energyA += (xr[p] * xr[p]) + (xi[p] * xi[p]);
                energyB += (yr[p] * yr[p]) + (yi[p] * yi[p]);
                pixels++;
            }
        }

        return (new Complex(re, im), energyA, energyB, pixels);
    }

    /// <summary>
    /// |⟨D_a, D_b⟩|²/(⟨D_a,D_a⟩⟨D_b,D_b⟩) over the sample as measured, and with the noise' share taken off the energies.
    /// </summary>
    public (double Measured, double WithoutNoise) Similarity(int a, int b)
    {
        (Complex overlap, double energyA, double energyB, _) = Overlap(a, b);
        double left = Math.Max(energyA - NoiseEnergy(a), 0) * Math.Max(energyB - NoiseEnergy(b), 0);
        double squared = (overlap.Real * overlap.Real) + (overlap.Imaginary * overlap.Imaginary);
        return (squared / (energyA * energyB), a == b ? 1 : squared / left);
    }

    /// <summary>A group's squared residual in units of its fringes' energy.</summary>
    public double ResidualShare(int group) => _residual[group] / (2 * Fits[group].PhaseRad.Length * Overlap(group, group).EnergyA);

    private double NoiseEnergy(int group)
    {
        double gain = StepFit.TryCreate(Fits[group].PhaseRad)?.FieldVariance ?? double.NaN, sum = 0;
        ReadOnlySpan<double> field = Fits[group].FieldReal;
        for (int p = 0; p < field.Length; p++)
        {
            sum += double.IsNaN(field[p]) || !double.IsFinite(PixelVariance[p]) ? 0 : gain * PixelVariance[p];
        }

        return sum;
    }

    private bool Run(CancellationToken cancel)
    {
        if (Fits.Length < CoherenceModel.FewestGroups)
        {
            return false;
        }

        double[]? variance = null;
        double largestStep = double.PositiveInfinity;
        for (int round = 0; round < MostRounds && largestStep > ConvergedRad; round++)
        {
            ForEachGroup(k => Fits[k].FitFields(), cancel);
            var model = CoherenceModel.Fit(Fits, _sample.Count, variance);
            if (model.UsablePixels < FewestPixels)
            {
                return false;
            }

            (variance, largestStep) = ImproveAll(model, cancel);
        }

        PixelVariance = variance!;

        return true;
    }

    /// <summary>One step for every group; returns each pixel's variance about the model, and the largest step.</summary>
    private (double[] Variance, double LargestStepRad) ImproveAll(CoherenceModel model, CancellationToken cancel)
    {
        var residuals = new double[Fits.Length][];
        var steps = new double[Fits.Length];
        ForEachGroup(k =>
        {
            residuals[k] = new double[_sample.Count];
            steps[k] = Fits[k].Improve(model, _settings.PowerSpread, residuals[k]);
        }, cancel);
        double[] variance = Variance(residuals);
        _residual = [.. residuals.Select(r => r.Sum())];
        Misfit = [.. residuals.Select((r, k) => MisfitOf(r, variance, Fits[k].PhaseRad.Length))];
        return (variance, steps.Max());
    }

    private static double MisfitOf(double[] residual, double[] variance, int steps)
    {
        double sum = 0;
        int freedom = (-2 * steps) + 1;
        for (int p = 0; p < residual.Length; p++)
        {
            if (residual[p] > 0 && double.IsFinite(variance[p]))
            {
                sum += residual[p] / variance[p];
                freedom += steps - 2;
            }
        }

        return freedom > 0 ? sum / freedom : double.NaN;
    }

    // Two of a group's S numbers a pixel are taken by its field.
    private double[] Variance(double[][] residuals)
    {
        var sum = new double[_sample.Count];
        var freedom = new int[_sample.Count];
        for (int k = 0; k < residuals.Length; k++)
        {
            int free = Fits[k].PhaseRad.Length - 2;
            for (int p = 0; p < sum.Length; p++)
            {
                sum[p] += residuals[k][p];
                freedom[p] += residuals[k][p] > 0 ? free : 0;
            }
        }

        return [.. sum.Zip(freedom, (s, n) => n > 0 ? Math.Max(s / n, 1.0 / 12) : double.PositiveInfinity)];
    }

    private void ForEachGroup(Action<int> action, CancellationToken cancel) => Parallel.For(
        0, Fits.Length, new ParallelOptions { MaxDegreeOfParallelism = _settings.Threads, CancellationToken = cancel }, action);
}
