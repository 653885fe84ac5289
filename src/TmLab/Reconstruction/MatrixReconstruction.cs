using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Reconstruction.Drift;

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
        IPatternBasis basis = PatternBases.Create(facts.Manifest.Modes, facts.CustomPatterns);
        DriftFacts drift = DriftEstimation.Run(reader, facts, settings, cancel);
        ImmutableArray<double> theta = FramePhases.Total(facts.Schedule, facts.Manifest.SteppedArm, drift);
        var weights = new FrameWeightTable(facts.Schedule, basis, theta, drift.FrameGain);
        PixelSurvey survey = PixelSurvey.Run(reader, facts, theta, settings, cancel);
        ReferenceIntensity? reference = ReferenceIntensity.Read(reader, facts);
        PixelJudgement pixels = PixelJudgement.Make(survey, reference, settings);
        var tiles = new TiledRows(reader, basis, weights, [.. facts.DarkCounts], pixels.RowScale, settings);
        double[] rowEnergy = tiles.Run(rows, progress, cancel);
        return MatrixAssessment.Make(facts, basis, weights, drift, survey, pixels, rowEnergy, settings);
    }
}
