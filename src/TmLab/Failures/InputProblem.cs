namespace TmLab.Failures;

/// <summary>One thing wrong with an input: enough to write the line "what, where, what to do".</summary>
/// <param name="File">The file or folder, as the user named it or relative to what the user named.</param>
/// <param name="Place">Where in it: a key, a row, a frame, a dataset; null when the whole file is meant.</param>
/// <param name="Found">What is wrong, with the numbers found, e.g. "schedule has 1096 rows for 1095 frames".</param>
/// <param name="Remedy">What the user can do about it, as an imperative sentence without a full stop.</param>
public sealed record InputProblem(string File, string? Place, string Found, string Remedy)
{
    /// <summary>The problem as one line: <c>file, place: what; remedy</c>.</summary>
    public override string ToString() =>
        Place is null ? $"{File}: {Found}; {Remedy}" : $"{File}, {Place}: {Found}; {Remedy}";
}
