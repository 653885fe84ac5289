namespace TmLab.Failures;

/// <summary>The root of all failures that the program explains to its user in one line. Wrong calls are argument exceptions instead.</summary>
public abstract class TmLabException : Exception
{
    private protected TmLabException(string message, Exception? inner = null)
        : base(message, inner)
    {
    }
}
