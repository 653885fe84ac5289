using System.Collections.Immutable;
using TmLab.Failures;

namespace TmLab.Measurement;

/// <summary>Checks of a modulator's grey-to-phase table.</summary>
public static class GrayPhaseChecks
{
    /// <summary>The largest grey level of an 8-bit panel.</summary>
    public const int LargestGray = 255;

    /// <summary>Whether there are two rows or more, grey levels lie in 0 … 255 and rise strictly, and phases are finite and rise strictly.</summary>
    public static ImmutableArray<InputProblem> Check(GrayPhaseTable table, string file)
    {
        var problems = new ProblemList(file);
        if (table.Gray.Length < 2)
        {
            problems.Add(null, $"the table has {table.Gray.Length} rows; at least 2 are needed", "give the phase at two or more grey levels");
        }

        problems.AddOfOneKind(Enumerable.Range(0, table.Gray.Length)
            .Select(i => (Place: ScheduleChecks.RowPlace(i), Found: Complaint(table, i)))
            .Where(c => c.Found is not null)
            .Select(c => (c.Place, c.Found!, "give grey levels 0 … 255 and phases in radians that both rise from row to row")));
        return problems.ToImmutable();
    }

    private static string? Complaint(GrayPhaseTable table, int i)
    {
        if (table.Gray[i] is < 0 or > LargestGray)
        {
            return $"grey level {table.Gray[i]} lies outside 0 … {LargestGray}";
        }

        if (!double.IsFinite(table.PhaseRad[i]))
        {
            return "the phase is not a finite number";
        }

        if (i > 0 && table.Gray[i] <= table.Gray[i - 1])
        {
            return $"grey level {table.Gray[i]} does not rise above {table.Gray[i - 1]} of the row before";
        }

        return i > 0 && !(table.PhaseRad[i] > table.PhaseRad[i - 1])
            ? FormattableString.Invariant($"phase {table.PhaseRad[i]} rad does not rise above {table.PhaseRad[i - 1]} rad of the row before: the table is not monotone")
            : null;
    }
}
