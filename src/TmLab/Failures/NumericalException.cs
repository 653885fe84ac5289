namespace TmLab.Failures;

/// <summary>A computation that did not succeed although its input was acceptable (exit code 1).</summary>
public sealed class NumericalException : TmLabException
{
    /// <summary>Reports what failed and what can be done.</summary>
    public NumericalException(string what, string remedy, Exception? inner = null)
        : base($"{what}; {remedy}", inner)
    {
    }
}
