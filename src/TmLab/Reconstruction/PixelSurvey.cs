using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Numerics.Kernels;

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
            int first = chunk * ChunkPixels, count = Math.Min(ChunkPixels, pixels - first);
            FringeStatistics totals = Chunk(reader, facts, groups, fits, first, count);
            survey.Store(totals, facts.Manifest.Camera, fits, first, count);
        });
        return survey;
    }

    private static StepGroup[] Spread(StepGroup[] groups, int count) =>
        groups.Length <= count
            ? groups
            : [.. Enumerable.Range(0, count).Select(i => groups[(int)((long)i * (groups.Length - 1) / Math.Max(1, count - 1))])];

    private static FringeStatistics Chunk(
        IFrameBlockReader reader, MeasurementFacts facts, StepGroup[] groups, StepFit[] fits, int first, int count)
    {
        var dark = new float[TileKernel.RoundUp(count)];
        facts.DarkCounts.AsSpan(first, count).CopyTo(dark);
        var totals = new FringeStatistics(dark, facts.Manifest.Camera.FullScaleCounts);
        var counts = new ushort[dark.Length * fits.Max(f => f.FrameCount)];
        for (int g = 0; g < groups.Length; g++)
        {
            for (int s = 0; s < fits[g].FrameCount; s++)
            {
                reader.Read(groups[g].Frames[s], 1, first, count, counts.AsSpan(s * dark.Length, count));
            }

            totals.Add(counts.AsSpan(0, dark.Length * fits[g].FrameCount), fits[g].ForStatistics());
        }

        return totals;
    }

    private void Store(FringeStatistics totals, CameraDescription camera, StepFit[] fits, int first, int count)
    {
        int frames = fits.Sum(f => f.FrameCount), freedom = fits.Sum(f => f.FrameCount - 3);
        for (int p = 0; p < count; p++)
        {
            Visibility[first + p] = totals.Visibility[p] / fits.Length;
            Light[first + p] = totals.Level[p] / fits.Length;
            SaturatedShare[first + p] = totals.Saturated[p] / frames;
            CountVariance[first + p] = freedom > 0 ? totals.SquaredResidual[p] / freedom : ModelVariance(camera, totals.Level[p] / fits.Length);
        }
    }

    private static float ModelVariance(CameraDescription camera, double level)
    {
        if (camera.ElectronsPerCount is not double gain)
        {
            return float.NaN;
        }

        double read = (camera.ReadNoiseElectrons ?? 0) / gain;
        return (float)((Math.Max(level, 0) / gain) + (read * read) + (1.0 / 12));
    }
}
