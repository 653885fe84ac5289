using TmLab.Numerics.LinearAlgebra;

namespace TmLab.Cli.Options;

/// <summary>What every command can be told.</summary>
/// <param name="Force">Overwrite existing outputs.</param>
/// <param name="Json">Print one JSON object instead of text.</param>
/// <param name="Quiet">Print no progress and no warnings.</param>
/// <param name="Verbose">Print traces of failures.</param>
/// <param name="MemoryBytes">Working memory to stay within; null leaves it to the stage.</param>
/// <param name="Engine">The linear-algebra engine.</param>
/// <param name="Threads">Number of threads; null takes all processors.</param>
internal sealed record CommonSettings(
    bool Force, bool Json, bool Quiet, bool Verbose, long? MemoryBytes, EngineChoice Engine, int? Threads);
