using System.Text;

namespace TmLab.Cli.Output;

/// <summary>Where results go (stdout) and where everything else goes (stderr).</summary>
internal sealed class ToolConsole(TextWriter output, MessageChannel messages) : IDisposable
{
    private static readonly UTF8Encoding PlainUtf8 = new(encoderShouldEmitUTF8Identifier: false);

    public TextWriter Out { get; } = output;

    public MessageChannel Messages { get; } = messages;

    /// <summary>
    /// The process' own streams, in UTF-8 whatever the terminal's setting. The runtime swallows writes to a pipe whose reader has
    /// gone, so that <c>tmlab … | head -1</c> succeeds.
    /// </summary>
    public static ToolConsole OpenStandardStreams()
    {
        var output = new StreamWriter(Console.OpenStandardOutput(), PlainUtf8);
        var error = new StreamWriter(Console.OpenStandardError(), PlainUtf8) { AutoFlush = true };
        return new ToolConsole(output, new MessageChannel(error, isTerminal: !Console.IsErrorRedirected));
    }

    public void Dispose()
    {
        Messages.ClearTransient();
        Out.Dispose();
        Messages.Writer.Dispose();
    }
}
