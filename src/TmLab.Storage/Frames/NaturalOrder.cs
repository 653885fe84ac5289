namespace TmLab.Storage.Frames;

/// <summary>Orders names as people count: runs of digits by their value (f2 before f10), all else by character code.</summary>
internal sealed class NaturalOrder : IComparer<string>
{
    public static NaturalOrder Instance { get; } = new();

    public int Compare(string? x, string? y)
    {
        ReadOnlySpan<char> first = x;
        ReadOnlySpan<char> second = y;
        while (!first.IsEmpty && !second.IsEmpty)
        {
            int compared = CompareStart(ref first, ref second);
            if (compared != 0)
            {
                return compared;
            }
        }

        // Names that differ in leading zeros alone still need an order.
        int byLength = first.Length.CompareTo(second.Length);
        return byLength != 0 ? byLength : string.CompareOrdinal(x, y);
    }

    private static int CompareStart(ref ReadOnlySpan<char> first, ref ReadOnlySpan<char> second)
    {
        if (!char.IsAsciiDigit(first[0]) || !char.IsAsciiDigit(second[0]))
        {
            int compared = first[0].CompareTo(second[0]);
            first = first[1..];
            second = second[1..];
            return compared;
        }

        ReadOnlySpan<char> a = TakeNumber(ref first);
        ReadOnlySpan<char> b = TakeNumber(ref second);
        return a.Length != b.Length ? a.Length.CompareTo(b.Length) : a.SequenceCompareTo(b);
    }

    private static ReadOnlySpan<char> TakeNumber(ref ReadOnlySpan<char> text)
    {
        int end = text.IndexOfAnyExceptInRange('0', '9');
        ReadOnlySpan<char> digits = end < 0 ? text : text[..end];
        text = text[digits.Length..];
        return digits.TrimStart('0');
    }
}
