using System.Runtime.InteropServices;
using TmLab.Cli.Failures;

namespace TmLab.Cli;

/// <summary>
/// Turns Ctrl-C and a request to terminate into a cancelled token, so that stages stop at their next check and clear away what is
/// half-written. A second signal ends the program at once.
/// </summary>
internal sealed class Interruption : IDisposable
{
    private readonly CancellationTokenSource _source = new();
    private readonly List<PosixSignalRegistration> _registrations = [];

    public Interruption()
    {
        _registrations.Add(PosixSignalRegistration.Create(PosixSignal.SIGINT, Stop));
        _registrations.Add(PosixSignalRegistration.Create(PosixSignal.SIGTERM, Stop));
    }

    public CancellationToken Token => _source.Token;

    public void Dispose()
    {
        _registrations.ForEach(r => r.Dispose());
        _source.Dispose();
    }

    private void Stop(PosixSignalContext context)
    {
        if (_source.IsCancellationRequested)
        {
            Environment.Exit((int)ExitCode.Interrupted);
        }

        context.Cancel = true;
        _source.Cancel();
    }
}
