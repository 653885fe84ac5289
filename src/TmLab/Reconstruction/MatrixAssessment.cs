using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Measurement.Bases;

namespace TmLab.Reconstruction;

/// <summary>Brings together what was found on the way: noise of rows and columns, quality figures, warnings.</summary>
internal sealed class MatrixAssessment
{
    private readonly MatrixEvidence _evidence;
    private readonly MeasurementFacts _facts;
    private readonly DriftFacts _drift;
    private readonly PixelSurvey _survey;
    private readonly PixelJudgement _pixels;
    private readonly double[] _modeGain;
    private readonly ReconstructionSettings _settings;

    private MatrixAssessment(MatrixEvidence evidence, ReconstructionSettings settings)
    {
        _evidence = evidence;
        (_facts, _drift, _survey, _pixels, _settings) = (evidence.Facts, evidence.Drift.Facts, evidence.Survey, evidence.Pixels, settings);
        // Variance of T[p, n] for unit variance of the counts of pixel p.
        _modeGain = [.. Enumerable.Range(0, evidence.Basis.ModeCount).Select(n => evidence.Basis.NoiseVariance(n, evidence.Weights.ColumnVariance))];
    }

    public static TransmissionMatrixFacts Make(MatrixEvidence evidence, ReconstructionSettings settings) =>
        new MatrixAssessment(evidence, settings).Facts();

    private TransmissionMatrixFacts Facts()
    {
        int width = _facts.FrameSize.Width;
        int pixels = _facts.PixelCount;
        MeasurementManifest manifest = _facts.Manifest;
        double[] rowVariance = RowVariance();
        bool[] modeValid = ModeValid();
        double meanGain = _modeGain.Average();
        (ErrorBudget budget, DecorrelationFacts decorrelation) =
            BudgetEstimation.Make(_evidence, [.. rowVariance.Select(v => v * meanGain * _modeGain.Length)]);
        DriftFacts drift = _drift with { Decorrelation = decorrelation };
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
                [.. rowVariance.Select(v => (float)Math.Sqrt(v * meanGain))])
            {
                Reason = _pixels.Reason,
            },
            new ModeFacts([.. modeValid], ModeNoise(rowVariance)),
            drift,
            Quality(rowVariance, modeValid, drift, budget));
    }

    /// <summary>Variance of a pixel's counts in the unit of its row.</summary>
    private double[] RowVariance() =>
        [.. _survey.CountVariance.Select((v, p) => (double)v * _pixels.RowScale[p] * _pixels.RowScale[p])];

    // One macro-pixel at a time a lost pattern is a lost column; pattern 0 of on/off patterns alone knows macro-pixel 0.
    private bool[] ModeValid()
    {
        HashSet<int> lost = [.. _evidence.Weights.LostPatterns];
        bool Valid(int mode) => _evidence.Basis switch
        {
            PixelBasis => !lost.Contains(mode),
            HadamardBinaryBasis => mode != 0 || !lost.Contains(0),
            _ => true,
        };
        return [.. Enumerable.Range(0, _modeGain.Length).Select(Valid)];
    }

    private ImmutableArray<float> ModeNoise(double[] rowVariance)
    {
        double mean = MeanOverValid(rowVariance);
        return [.. _modeGain.Select(g => (float)Math.Sqrt(mean * g))];
    }

    private MatrixQuality Quality(double[] rowVariance, bool[] modeValid, DriftFacts drift, ErrorBudget budget)
    {
        double noise = MeanOverValid(rowVariance) * _modeGain.Sum();
        double measured = MeanOverValid(_evidence.RowEnergy);
        var quality = new MatrixQuality(
            MeanOverValid([.. _survey.Visibility.Select(v => (double)v)]),
            Math.Max(measured - noise, 0) / noise,
            _pixels.Valid.Count(v => v),
            modeValid.Count(v => v),
            _pixels.Normalised,
            [])
        {
            Frames = _evidence.Frames,
            LostPatterns = _evidence.Weights.LostPatterns,
            OutlyingModes = _evidence.OutlyingModes,
            Budget = budget,
        };
        bool dependent = _evidence.Basis is CustomBasis custom && custom.Condition > CustomBasis.LargestCondition;
        bool noiseUnknown = _survey.CountVariance.All(float.IsNaN);
        return quality with { Warnings = [.. MatrixWarnings.For(_facts, drift, _pixels, quality, noiseUnknown, dependent, _settings)] };
    }

    private double MeanOverValid(double[] values) =>
        values.Where((_, p) => _pixels.Valid[p]).DefaultIfEmpty(double.NaN).Average();
}
