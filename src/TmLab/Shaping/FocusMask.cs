using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;

namespace TmLab.Shaping;

/// <summary>A phase mask that focuses on camera pixels, as the panel will show it, with what it should achieve. Immutable.</summary>
/// <param name="Image">The panel's image.</param>
/// <param name="PhaseRad">The phase that each macro-pixel gets, after rounding to the panel's levels, radians.</param>
/// <param name="Levels">Number of levels of the panel within one turn.</param>
/// <param name="Targets">One entry a target.</param>
/// <param name="IdealEnhancement">1 + (π/4)(N − 1): the mean for one target in a random medium without noise.</param>
/// <param name="Cautions">What the user must know before showing it.</param>
public sealed record FocusMask(
    ModulatorImage Image,
    ImmutableArray<double> PhaseRad,
    int Levels,
    ImmutableArray<TargetPrediction> Targets,
    double IdealEnhancement,
    ImmutableArray<string> Cautions)
{
    /// <summary>The caution that goes with every mask.</summary>
    public const string LightCaution =
        "A mask concentrates light: a focus can exceed the exposure that the safety case assumed for eyes, sensor and sample. "
        + "The laser safety officer, local rules and the applicable laser-safety standard (IEC 60825-1 or its local counterpart) decide.";

    /// <summary>Makes the mask by phase conjugation.</summary>
    /// <param name="matrix">The transmission matrix; only the targets' rows are read.</param>
    /// <param name="facts">Its facts.</param>
    /// <param name="file">The matrix file's name, for messages.</param>
    /// <param name="targets">The targets, at least one.</param>
    /// <exception cref="BadInputException">A target cannot be used, or the panel is unknown or not a phase panel.</exception>
    public static FocusMask Make(
        IRowBlockReader matrix, TransmissionMatrixFacts facts, string file, ImmutableArray<FocusTarget> targets)
    {
        ModulatorDescription panel = PhasePanel(facts, file);
        ImmutableArray<TargetRow> rows = TargetRow.Read(matrix, facts, file, targets);
        var scale = new GrayScale(facts.PhaseLut);
        (byte Gray, double PhaseRad)[] levels = [.. PhaseConjugation.Phases(rows).Select(scale.Nearest)];
        Complex[] field = [.. levels.Select(l => Complex.FromPolarCoordinates(1, l.PhaseRad))];
        return new FocusMask(
            PanelDrawing.Draw(panel, facts.Grid, [.. levels.Select(l => l.Gray)], facts.Flatness),
            [.. levels.Select(l => l.PhaseRad)],
            scale.LevelCount,
            [.. rows.Select(r => TargetPrediction.Make(r, field))],
            FocusEnhancement.PhaseOnly(facts.Grid.Count),
            [LightCaution]);
    }

    private static ModulatorDescription PhasePanel(TransmissionMatrixFacts facts, string file)
    {
        if (facts.Modulator is not ModulatorDescription panel)
        {
            throw new BadInputException(
                file, "modulator", "the measurement does not say what the modulator is", "add \"modulator\" to measurement.json and ingest again");
        }

        return panel.Kind == ModulatorKind.Phase
            ? panel
            : throw new BadInputException(
                file, "modulator.kind", "the modulator changes amplitude, and a phase mask cannot be shown on it", "use a phase modulator");
    }
}

/// <summary>What a mask should do at one target.</summary>
/// <param name="Target">The target.</param>
/// <param name="EnhancementOnMatrix">η on the measured row, noise and all.</param>
/// <param name="PredictedEnhancement">η to expect at the bench; NaN where the row's noise is not known.</param>
public sealed record TargetPrediction(FocusTarget Target, double EnhancementOnMatrix, double PredictedEnhancement)
{
    /// <summary>Predicts for a field of modulus 1.</summary>
    public static TargetPrediction Make(TargetRow row, ReadOnlySpan<Complex> field)
    {
        double onRow = FocusEnhancement.OnRow(row, field);
        return new TargetPrediction(row.Target, onRow, FocusEnhancement.Predicted(onRow, row.SignalShare));
    }
}
