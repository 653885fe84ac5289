using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Reconstruction.Drift;
using TmLab.Reconstruction.Frames;

namespace TmLab.Reconstruction;

/// <summary>From counts to the transmission matrix: the drift path, a survey of the pixels, then tile after tile of rows.</summary>
public static class MatrixReconstruction
{
    /// <summary>Reconstructs the matrix of a measurement.</summary>
    /// <param name="reader">The counts.</param>
    /// <param name="facts">All else of the measurement, checked.</param>
    /// <param name="settings">How to do it.</param>
    /// <param name="rows">Takes the rows, each once, in any order, from several threads.</param>
    /// <param name="progress">Hears of the pixels done.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <returns>What is known of the matrix besides its elements.</returns>
    public static TransmissionMatrixFacts Run(
        IFrameBlockReader reader,
        MeasurementFacts facts,
        ReconstructionSettings settings,
        IRowBlockWriter rows,
        IProgress<StageProgress>? progress,
        CancellationToken cancel)
    {
        PixelSample sample = PixelSample.Read(reader, facts, settings);
        (FrameSearchOutcome frames, DriftEstimate drift) = FollowFrames(reader, facts, sample, settings, cancel);
        MeasurementFacts found = facts with { Schedule = frames.Schedule };
        ImmutableArray<double> theta = FramePhases.Total(found.Schedule, facts.Manifest.SteppedArm, drift.Facts);
        IPatternBasis basis = BasisOf(found);
        var weights = new FrameWeightTable(found.Schedule, basis, theta, drift.Facts.FrameGain);
        PixelSurvey survey = PixelSurvey.Run(reader, found, theta, settings, cancel);
        ReferenceIntensity? reference = ReferenceIntensity.Read(reader, found);
        PixelJudgement pixels = PixelJudgement.Make(survey, reference, found, settings);
        float[] dark = [.. facts.DarkCounts];
        var tiles = new TiledRows(reader, basis, weights, dark, pixels.RowScale, settings);
        double[] rowEnergy = tiles.Run(rows, progress, cancel);
        var evidence = new MatrixEvidence(
            found, basis, theta, weights, drift, survey, pixels, rowEnergy, frames.Findings, ColumnEnergies.Outlying(reader, basis, weights, dark, pixels));
        return MatrixAssessment.Make(evidence, settings);
    }

    /// <summary>Which frame stands where, then the drift; groups that do not fit even with free phases are left out and the drift found again.</summary>
    private static (FrameSearchOutcome Frames, DriftEstimate Drift) FollowFrames(
        IFrameBlockReader reader, MeasurementFacts facts, PixelSample sample, ReconstructionSettings settings, CancellationToken cancel)
    {
        FrameSearchOutcome frames = FrameSearch.Run(facts.Schedule, facts.Manifest.SteppedArm, sample);
        DriftEstimate Follow() => DriftEstimation.Estimate(reader, facts with { Schedule = frames.Schedule }, sample, settings, cancel);
        DriftEstimate drift = Follow();
        ImmutableArray<(StepGroup Group, FrameFinding Finding)> wrong = drift.Phases is null ? [] : MisfittingGroups.Find(frames, drift.Phases);
        if (wrong.IsEmpty)
        {
            return (frames, drift);
        }

        frames = frames.Without(wrong);
        return (frames, Follow());
    }

    // Least squares without the rows of lost patterns; the fast transforms take a zero, or a guess, in their place.
    private static IPatternBasis BasisOf(MeasurementFacts facts)
    {
        ModeDescription modes = facts.Manifest.Modes;
        if (modes.Basis != BasisKind.Custom)
        {
            return PatternBases.Create(modes, facts.CustomPatterns);
        }

        HashSet<int> shown = [.. facts.Schedule.Groups.Select(g => g.Mode)];
        return PatternBases.Create(modes, [.. facts.CustomPatterns.Select((b, i) => shown.Contains(i / modes.ModeCount) ? b : 0)]);
    }
}
