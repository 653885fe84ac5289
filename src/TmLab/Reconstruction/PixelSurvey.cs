using System.Collections.Immutable;
using System.Numerics;
using TmLab.Measurement;

namespace TmLab.Reconstruction;

/// <summary>What a look at some of the modes says of every pixel.</summary>
/// <param name="Visibility">Mean modulation depth 2|D|/(a − dark).</param>
/// <param name="CountVariance">Variance of a frame's counts about the fit, counts²; NaN where it cannot be known.</param>
/// <param name="SaturatedShare">Share of the surveyed frames at full scale.</param>
/// <param name="Light">Mean counts above the dark level.</param>
internal sealed record PixelSurvey(float[] Visibility, float[] CountVariance, float[] SaturatedShare, float[] Light)
{
    private const int ChunkPixels = 8192;

    /// <summary>
    /// Surveys the pixels on modes spread evenly over the schedule. The noise is that of the fit's residuals, S − 3 degrees of
    /// freedom a group; with three steps there are none, and the camera's own figures serve, if given (EMVA 1288: variance =
    /// mean/K + (read noise/K)² + 1/12, K electrons a count).
    /// </summary>
    public static PixelSurvey Run(
        IFrameBlockReader reader, MeasurementFacts facts, ImmutableArray<double> totalPhaseRad, ReconstructionSettings settings, CancellationToken cancel)
    {
        StepGroup[] groups = Spread([.. facts.Schedule.Modes], settings.SurveyModes);
        StepFit[] fits = [.. groups.Select(g => FramePhases.Fit(g, totalPhaseRad))];
        int pixels = facts.PixelCount;
        var survey = new PixelSurvey(new float[pixels], new float[pixels], new float[pixels], new float[pixels]);
        var options = new ParallelOptions { MaxDegreeOfParallelism = settings.Threads, CancellationToken = cancel };
        Parallel.For(0, (pixels + ChunkPixels - 1) / ChunkPixels, options, chunk =>
        {
            int first = chunk * ChunkPixels;
            var totals = new ChunkTotals(facts, first, Math.Min(ChunkPixels, pixels - first));
            for (int g = 0; g < groups.Length; g++)
            {
                totals.Add(reader, groups[g], fits[g]);
            }

            totals.Store(survey);
        });
        return survey;
    }

    private static StepGroup[] Spread(StepGroup[] groups, int count) =>
        groups.Length <= count
            ? groups
            : [.. Enumerable.Range(0, count).Select(i => groups[(int)((long)i * (groups.Length - 1) / Math.Max(1, count - 1))])];

    private sealed class ChunkTotals(MeasurementFacts facts, int first, int pixels)
    {
        private readonly double[] _visibility = new double[pixels];
        private readonly double[] _residual = new double[pixels];
        private readonly double[] _background = new double[pixels];
        private readonly int[] _saturated = new int[pixels];
        private ushort[] _counts = [];
        private int _groups;
        private int _frames;
        private int _freedom;

        public void Add(IFrameBlockReader reader, StepGroup group, StepFit fit)
        {
            int steps = fit.FrameCount;
            Array.Resize(ref _counts, steps * pixels);
            for (int s = 0; s < steps; s++)
            {
                reader.Read(group.Frames[s], 1, first, pixels, _counts.AsSpan(s * pixels, pixels));
            }

            for (int p = 0; p < pixels; p++)
            {
                AddPixel(fit, p);
            }

            _groups++;
            _frames += steps;
            _freedom += steps - 3;
        }

        public void Store(PixelSurvey survey)
        {
            for (int p = 0; p < pixels; p++)
            {
                survey.Visibility[first + p] = (float)(_visibility[p] / _groups);
                survey.Light[first + p] = (float)(_background[p] / _groups);
                survey.SaturatedShare[first + p] = (float)_saturated[p] / _frames;
                survey.CountVariance[first + p] = (float)(_freedom > 0 ? _residual[p] / _freedom : ModelVariance(_background[p] / _groups));
            }
        }

        private void AddPixel(StepFit fit, int p)
        {
            double a = 0, re = 0, im = 0;
            for (int s = 0; s < fit.FrameCount; s++)
            {
                double count = _counts[(s * pixels) + p];
                a += fit.Background[s] * count;
                re += fit.Field[s].Real * count;
                im += fit.Field[s].Imaginary * count;
                _saturated[p] += count >= facts.Manifest.Camera.FullScaleCounts ? 1 : 0;
            }

            double level = a - facts.DarkCounts[first + p];
            _background[p] += level;
            _visibility[p] += level > 0 ? 2 * Math.Sqrt((re * re) + (im * im)) / level : 0;
            for (int s = 0; s < fit.FrameCount; s++)
            {
                double residual = _counts[(s * pixels) + p] - fit.Model(s, a, new Complex(re, im));
                _residual[p] += residual * residual;
            }
        }

        private double ModelVariance(double level)
        {
            CameraDescription camera = facts.Manifest.Camera;
            if (camera.ElectronsPerCount is not double gain)
            {
                return double.NaN;
            }

            double read = (camera.ReadNoiseElectrons ?? 0) / gain;
            return (Math.Max(level, 0) / gain) + (read * read) + (1.0 / 12);
        }
    }
}
