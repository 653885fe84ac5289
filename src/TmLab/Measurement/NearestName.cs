namespace TmLab.Measurement;

/// <summary>Finds what a mistyped name was probably meant to be.</summary>
public static class NearestName
{
    /// <summary>
    /// The known name with the least edit distance (Levenshtein 1966: insertions, deletions, substitutions, case ignored) from
    /// <paramref name="name"/>, where a name that begins with the other counts as one edit away (units are often left out); the
    /// first of several equally near ones; null when there are no known names.
    /// </summary>
    public static string? Of(string name, IEnumerable<string> known) =>
        known.MinBy(k => IsBeginning(name, k) || IsBeginning(k, name) ? Math.Min(1, EditDistance(name, k)) : EditDistance(name, k));

    /// <summary>The number of single-character insertions, deletions and substitutions that turn one name into the other; case ignored.</summary>
    public static int EditDistance(string first, string second)
    {
        // One row of the dynamic-programming table at a time.
        int[] row = [.. Enumerable.Range(0, second.Length + 1)];
        for (int i = 1; i <= first.Length; i++)
        {
            int diagonal = row[0];
            row[0] = i;
            for (int j = 1; j <= second.Length; j++)
            {
                int substituted = diagonal + (SameLetter(first[i - 1], second[j - 1]) ? 0 : 1);
                diagonal = row[j];
                row[j] = Math.Min(substituted, 1 + Math.Min(row[j], row[j - 1]));
            }
        }

        return row[second.Length];
    }

    private static bool IsBeginning(string start, string whole) =>
        start.Length >= 3 && whole.StartsWith(start, StringComparison.OrdinalIgnoreCase);

    private static bool SameLetter(char a, char b) => char.ToUpperInvariant(a) == char.ToUpperInvariant(b);
}
