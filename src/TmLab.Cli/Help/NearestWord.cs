namespace TmLab.Cli.Help;

/// <summary>Finds the known word that a mistyped one was probably meant to be.</summary>
internal static class NearestWord
{
    /// <summary>The known word within a third of the word's length in edits (at least two), or null.</summary>
    public static string? Find(string word, IEnumerable<string> known)
    {
        int limit = Math.Max(2, word.Length / 3);
        (string Word, int Distance)[] near =
        [
            .. known.Select(k => (Word: k, Distance: EditDistance(word, k)))
                .Where(c => c.Distance <= limit && c.Distance < word.Length)
                .OrderBy(c => c.Distance)
                .ThenBy(c => c.Word, StringComparer.Ordinal),
        ];
        return near.Length == 0 ? null : near[0].Word;
    }

    /// <summary>
    /// Number of insertions, deletions, substitutions and swaps of neighbours (optimal string alignment; Damerau, Commun. ACM 7,
    /// 171 (1964)), so that "ingset" is one step from "ingest".
    /// </summary>
    public static int EditDistance(string a, string b)
    {
        var d = new int[a.Length + 1, b.Length + 1];
        for (int i = 0; i <= a.Length; i++)
        {
            d[i, 0] = i;
        }

        for (int j = 0; j <= b.Length; j++)
        {
            d[0, j] = j;
        }

        for (int i = 1; i <= a.Length; i++)
        {
            for (int j = 1; j <= b.Length; j++)
            {
                d[i, j] = Step(a, b, d, i, j);
            }
        }

        return d[a.Length, b.Length];
    }

    private static int Step(string a, string b, int[,] d, int i, int j)
    {
        int change = d[i - 1, j - 1] + (a[i - 1] == b[j - 1] ? 0 : 1);
        int best = Math.Min(change, Math.Min(d[i - 1, j], d[i, j - 1]) + 1);
        bool swapped = i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1];
        return swapped ? Math.Min(best, d[i - 2, j - 2] + 1) : best;
    }
}
