namespace TmLab.Quantities;

/// <summary>How far a long computation has come.</summary>
/// <param name="Activity">What is being done, in a few words ("reading frames").</param>
/// <param name="Done">Units done.</param>
/// <param name="Total">Units in all.</param>
/// <param name="Unit">The unit's plural name ("frames", "pixels").</param>
public readonly record struct StageProgress(string Activity, long Done, long Total, string Unit);
