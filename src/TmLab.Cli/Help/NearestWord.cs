using TmLab.Measurement;

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
            .. known.Select(k => (Word: k, Distance: NearestName.EditDistance(word, k)))
                .Where(c => c.Distance <= limit && c.Distance < word.Length)
                .OrderBy(c => c.Distance)
                .ThenBy(c => c.Word, StringComparer.Ordinal),
        ];
        return near.Length == 0 ? null : near[0].Word;
    }
}
