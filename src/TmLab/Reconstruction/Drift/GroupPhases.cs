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

    /// <summary>Σ_p D_k conj(D_0) over the sample with pixels left out where either is unknown, and the two energies.</summary>
    public (Complex Overlap, double EnergyA, double EnergyB, int Pixels) Overlap(int a, int b)
    {
        Complex overlap = 0;
        double energyA = 0, energyB = 0;
        int pixels = 0;
        for (int p = 0; p < _sample.Count; p++)
        {
            Complex x = Fits[a].Field[p], y = Fits[b].Field[p];
            if (Complex.IsFinite(x) && Complex.IsFinite(y))
            {
                overlap += x * Complex.Conjugate(y);
                energyA += (x.Real * x.Real) + (x.Imaginary * x.Imaginary);
                energyB += (y.Real * y.Real) + (y.Imaginary * y.Imaginary);
                pixels++;
            }
        }

        return (overlap, energyA, energyB, pixels);
    }

    /// <summary>
    /// |⟨D_a, D_b⟩|²/(⟨D_a,D_a⟩⟨D_b,D_b⟩) over the sample as measured, and with the noise' share taken off the energies.
    /// </summary>
    public (double Measured, double WithoutNoise) Similarity(int a, int b)
    {
        Complex overlap = 0;
        double energyA = 0, energyB = 0, noiseA = 0, noiseB = 0;
        (double gainA, double gainB) = (NoiseGain(a), NoiseGain(b));
        for (int p = 0; p < _sample.Count; p++)
        {
            Complex x = Fits[a].Field[p], y = Fits[b].Field[p];
            if (Complex.IsFinite(x) && Complex.IsFinite(y) && double.IsFinite(PixelVariance[p]))
            {
                overlap += x * Complex.Conjugate(y);
                (energyA, energyB) = (energyA + Square(x), energyB + Square(y));
                (noiseA, noiseB) = (noiseA + (gainA * PixelVariance[p]), noiseB + (gainB * PixelVariance[p]));
            }
        }

        double squared = Square(overlap);
        double left = Math.Max(energyA - noiseA, 0) * Math.Max(energyB - noiseB, 0);
        return (squared / (energyA * energyB), a == b ? 1 : squared / left);
    }

    /// <summary>A group's squared residual in units of its fringes' energy.</summary>
    public double ResidualShare(int group)
    {
        double fringes = 0;
        foreach (Complex d in Fits[group].Field)
        {
            fringes += Complex.IsFinite(d) ? 2 * Fits[group].PhaseRad.Length * Square(d) : 0;
        }

        return _residual[group] / fringes;
    }

    private double NoiseGain(int group) => StepFit.TryCreate(Fits[group].PhaseRad)?.FieldVariance ?? double.NaN;

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
            CoherenceModel model = FitModel(variance, cancel);
            if (model.Variance.Count(double.IsFinite) < FewestPixels)
            {
                return false;
            }

            (variance, largestStep) = ImproveAll(model, cancel);
        }

        PixelVariance = variance!;

        return true;
    }

    private CoherenceModel FitModel(double[]? variance, CancellationToken cancel)
    {
        var backgrounds = new double[Fits.Length][];
        ForEachGroup(k =>
        {
            backgrounds[k] = new double[_sample.Count];
            Fits[k].FitFields(backgrounds[k]);
        }, cancel);
        int pixels = _sample.Count;
        (double[] alpha, double[] beta, double[] spread) = (new double[pixels], new double[pixels], new double[pixels]);
        Parallel.For(0, pixels, Options(cancel), p =>
        {
            double[] a = [.. backgrounds.Select(b => b[p])];
            double[] q = [.. Fits.Select(f => Square(f.Field[p]))];
            bool usable = CoherenceModel.TryFit(a, q, out alpha[p], out beta[p]);
            // Before residuals are known, shot noise gives the pixels' relative weights.
            spread[p] = usable ? variance?[p] ?? Math.Max(alpha[p], 1) : double.PositiveInfinity;
        });
        return new CoherenceModel(alpha, beta, spread);
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
        var variance = new double[_sample.Count];
        for (int p = 0; p < variance.Length; p++)
        {
            double sum = 0;
            int freedom = 0;
            for (int k = 0; k < Fits.Length; k++)
            {
                sum += residuals[k][p];
                freedom += residuals[k][p] > 0 ? Fits[k].PhaseRad.Length - 2 : 0;
            }

            variance[p] = freedom > 0 ? Math.Max(sum / freedom, 1.0 / 12) : double.PositiveInfinity;
        }

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

    private void ForEachGroup(Action<int> action, CancellationToken cancel) => Parallel.For(0, Fits.Length, Options(cancel), action);

    private ParallelOptions Options(CancellationToken cancel) =>
        new() { MaxDegreeOfParallelism = _settings.Threads, CancellationToken = cancel };

    private static double Square(Complex z) => (z.Real * z.Real) + (z.Imaginary * z.Imaginary);
}
