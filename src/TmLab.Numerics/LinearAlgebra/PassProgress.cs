namespace TmLab.Numerics.LinearAlgebra;

/// <summary>How far a pass over the rows of a matrix has come.</summary>
/// <param name="Activity">What the pass does, in a few words.</param>
/// <param name="RowsDone">Rows done.</param>
/// <param name="RowsTotal">Rows in all.</param>
public readonly record struct PassProgress(string Activity, long RowsDone, long RowsTotal);
