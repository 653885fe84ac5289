using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;

namespace TmLab.Reconstruction;

/// <summary>Brings together what was found on the way: noise of rows and columns, quality figures, warnings.</summary>
internal sealed class MatrixAssessment
{
    private readonly MeasurementFacts _facts;
    private readonly ReconstructionSettings _settings;
    private readonly DriftFacts _drift;
    private readonly PixelSurvey _survey;
    private readonly PixelJudgement _pixels;
    private readonly double[] _rowEnergy;
    private readonly double[] _modeGain;
    private readonly double _patternCondition;

    private MatrixAssessment(
        MeasurementFacts facts,
        IPatternBasis basis,
        FrameWeightTable weights,
        DriftFacts drift,
        PixelSurvey survey,
        PixelJudgement pixels,
        double[] rowEnergy,
        ReconstructionSettings settings)
    {
        (_facts, _settings, _drift, _survey, _pixels, _rowEnergy) = (facts, settings, drift, survey, pixels, rowEnergy);
        _patternCondition = basis is CustomBasis custom ? custom.Condition : 1;
        // Variance of T[p, n] for unit variance of the counts of pixel p.
        _modeGain = [.. Enumerable.Range(0, basis.ModeCount).Select(n => basis.NoiseVariance(n, weights.ColumnVariance))];
    }

    public static TransmissionMatrixFacts Make(
        MeasurementFacts facts,
        IPatternBasis basis,
        FrameWeightTable weights,
        DriftFacts drift,
        PixelSurvey survey,
        PixelJudgement pixels,
        double[] rowEnergy,
        ReconstructionSettings settings) =>
        new MatrixAssessment(facts, basis, weights, drift, survey, pixels, rowEnergy, settings).Facts();

    private TransmissionMatrixFacts Facts()
    {
        int width = _facts.FrameSize.Width;
        int pixels = _facts.PixelCount;
        MeasurementManifest manifest = _facts.Manifest;
        double[] rowVariance = RowVariance();
        double meanGain = _modeGain.Average();
        return new TransmissionMatrixFacts(
            manifest.Title,
            manifest.WavelengthNm,
            _facts.FrameSize,
            manifest.Modes.Grid,
            manifest.Modulator,
            _facts.PhaseLut,
            _facts.Flatness,
            new PixelFacts(
                [.. Enumerable.Range(0, pixels).Select(p => p / width)],
                [.. Enumerable.Range(0, pixels).Select(p => p % width)],
                [.. _pixels.Valid],
                [.. _survey.Visibility],
                [.. rowVariance.Select(v => (float)Math.Sqrt(v * meanGain))]),
            new ModeFacts([.. _modeGain.Select(_ => true)], ModeNoise(rowVariance)),
            _drift,
            Quality(rowVariance));
    }

    /// <summary>Variance of a pixel's counts in the unit of its row.</summary>
    private double[] RowVariance() =>
        [.. _survey.CountVariance.Select((v, p) => (double)v * _pixels.RowScale[p] * _pixels.RowScale[p])];

    private ImmutableArray<float> ModeNoise(double[] rowVariance)
    {
        double mean = MeanOverValid(rowVariance);
        return [.. _modeGain.Select(g => (float)Math.Sqrt(mean * g))];
    }

    private MatrixQuality Quality(double[] rowVariance)
    {
        double noise = MeanOverValid(rowVariance) * _modeGain.Sum();
        double measured = MeanOverValid(_rowEnergy);
        int valid = _pixels.Valid.Count(v => v);
        return new MatrixQuality(
            MeanOverValid([.. _survey.Visibility.Select(v => (double)v)]),
            Math.Max(measured - noise, 0) / noise,
            valid,
            _modeGain.Length,
            _pixels.Normalised,
            [.. Warnings(valid)]);
    }

    private double MeanOverValid(double[] values) =>
        values.Where((_, p) => _pixels.Valid[p]).DefaultIfEmpty(double.NaN).Average();

    private IEnumerable<string> Warnings(int valid)
    {
        if (_drift.TrackerTimeS.Length < 2)
        {
            yield return (_drift.Method == DriftMethod.SmoothedPath
                ? "There are no trackers: the phase drift inside every mode was removed, but what drifted from one mode to the next is still in the matrix. "
                : "There are no trackers to follow the phase drift: what drift there was is still in the matrix. ")
                + "Show one pattern again every few modes, with the role tracker.";
        }

        for (int k = 1; k < _drift.TrackerPhaseRad.Length; k++)
        {
            double gap = Math.Abs(_drift.TrackerPhaseRad[k] - _drift.TrackerPhaseRad[k - 1]);
            if (gap > _settings.TrackerGapWarningRad)
            {
                yield return FormattableString.Invariant(
                    $"The phase moved by {gap:F2} rad from the tracker at {_drift.TrackerTimeS[k - 1]:F2} s to that at {_drift.TrackerTimeS[k]:F2} s: near π it cannot be unwrapped. Show trackers more often.");
            }
        }

        if (_patternCondition > CustomBasis.LargestCondition)
        {
            yield return "The custom patterns are nearly dependent: what they do not tell apart is missing from the matrix. Choose patterns that span all modes.";
        }

        if (valid == 0)
        {
            yield return "No pixel is valid: every one is saturated, shows no modulation or has too little reference.";
        }

        if (_survey.CountVariance.All(float.IsNaN))
        {
            yield return "With three steps the noise cannot be measured, and camera.electrons_per_count is not given: noise is not known.";
        }
    }
}
