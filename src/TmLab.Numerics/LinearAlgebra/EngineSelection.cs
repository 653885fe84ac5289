namespace TmLab.Numerics.LinearAlgebra;

/// <summary>What became of a wish for an engine.</summary>
/// <param name="Engine">The engine; null only when the native one was demanded and is not to be had.</param>
/// <param name="Explanation">One line: why the choice fell back or failed, null when there is nothing to explain.</param>
public sealed record EngineSelection(ILinearAlgebraEngine? Engine, string? Explanation)
{
    /// <summary>Whether an engine is there.</summary>
    public bool Succeeded => Engine is not null;
}
