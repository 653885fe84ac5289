using System.Collections.Immutable;
using TmLab.Measurement;

namespace TmLab.Shaping;

/// <summary>
/// The grey levels that a phase panel may show and the phase of each. Without a table, grey g means 2π g / 256. A phase is shown
/// by the level nearest to it on the circle, so that rounding wraps.
/// </summary>
public sealed class GrayScale
{
    private const int Levels = 256;

    private readonly ImmutableArray<byte> _gray;
    private readonly ImmutableArray<double> _phase;

    /// <summary>Takes the panel's calibration; null means that grey is proportional to phase.</summary>
    public GrayScale(GrayPhaseTable? table)
    {
        (int Gray, double Phase)[] entries = table is null ? Proportional() : Interpolated(table);
        _gray = [.. entries.Select(e => (byte)e.Gray)];
        _phase = [.. entries.Select(e => e.Phase)];
    }

    /// <summary>Number of levels within one turn.</summary>
    public int LevelCount => _phase.Count(p => p - _phase[0] < 2 * Math.PI - 1e-9);

    /// <summary>Phase between the first and the last level, radians, plus one mean step: 2π for a full stroke.</summary>
    public double StrokeRad => (_phase[^1] - _phase[0]) * _phase.Length / (_phase.Length - 1);

    /// <summary>The level whose phase is nearest to <paramref name="phaseRad"/> on the circle, and the phase that it gives.</summary>
    public (byte Gray, double PhaseRad) Nearest(double phaseRad)
    {
        int best = 0;
        double least = double.PositiveInfinity;
        for (int i = 0; i < _phase.Length; i++)
        {
            double off = Math.Abs(Math.IEEERemainder(_phase[i] - phaseRad, 2 * Math.PI));
            if (off < least)
            {
                (best, least) = (i, off);
            }
        }

        return (_gray[best], _phase[best]);
    }

    private static (int, double)[] Proportional() =>
        [.. Enumerable.Range(0, Levels).Select(g => (g, 2 * Math.PI * g / Levels))];

    // Every whole grey level between the table's ends, its phase by linear interpolation.
    private static (int, double)[] Interpolated(GrayPhaseTable table)
    {
        var entries = new List<(int, double)>();
        for (int i = 0; i + 1 < table.Gray.Length; i++)
        {
            int from = table.Gray[i], to = table.Gray[i + 1];
            for (int g = from; g < to; g++)
            {
                double share = (double)(g - from) / (to - from);
                entries.Add((g, table.PhaseRad[i] + (share * (table.PhaseRad[i + 1] - table.PhaseRad[i]))));
            }
        }

        entries.Add((table.Gray[^1], table.PhaseRad[^1]));
        return [.. entries];
    }
}
