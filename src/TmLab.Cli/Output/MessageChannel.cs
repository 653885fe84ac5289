namespace TmLab.Cli.Output;

/// <summary>
/// Everything said on stderr: warnings, errors, and on a terminal one transient line at the bottom that is redrawn and always
/// makes room for lasting lines. Safe to use from several threads.
/// </summary>
internal sealed class MessageChannel(TextWriter writer, bool isTerminal)
{
    /// <summary>Returns to the start of the line and clears it (ECMA-48, CR and EL).</summary>
    private const string ClearLine = "\r\u001b[K";

    private readonly Lock _lock = new();
    private bool _transientShown;

    public TextWriter Writer { get; } = writer;

    /// <summary>Whether a line can be redrawn.</summary>
    public bool IsTerminal { get; } = isTerminal;

    public void Error(string text) => Detail($"{CommandLine.ProgramName}: {text}");

    public void Warning(string text) => Detail($"warning: {text}");

    /// <summary>A lasting line without a prefix.</summary>
    public void Detail(string text)
    {
        lock (_lock)
        {
            RemoveTransient();
            Writer.WriteLine(text);
        }
    }

    /// <summary>Shows or replaces the transient line. Only for terminals.</summary>
    public void ShowTransient(string text)
    {
        lock (_lock)
        {
            Writer.Write(ClearLine + text);
            Writer.Flush();
            _transientShown = true;
        }
    }

    /// <summary>Removes the transient line where one is shown.</summary>
    public void ClearTransient()
    {
        lock (_lock)
        {
            RemoveTransient();
        }
    }

    private void RemoveTransient()
    {
        if (_transientShown)
        {
            Writer.Write(ClearLine);
            _transientShown = false;
        }
    }
}
