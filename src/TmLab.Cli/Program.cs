using System.Globalization;
using TmLab.Cli.Output;
using TmLab.Cli.Stages;

namespace TmLab.Cli;

internal static class Program
{
    private static int Main(string[] arguments)
    {
        UseInvariantCulture();
        using var interruption = new Interruption();
        using var console = ToolConsole.OpenStandardStreams();
        return (int)CommandLine.Run(arguments, new StoredStages(), console, interruption.Token);
    }

    /// <summary>Laboratories with decimal commas exist; numbers read and written here never depend on where the program runs.</summary>
    private static void UseInvariantCulture()
    {
        CultureInfo.CurrentCulture = CultureInfo.InvariantCulture;
        CultureInfo.CurrentUICulture = CultureInfo.InvariantCulture;
        CultureInfo.DefaultThreadCurrentCulture = CultureInfo.InvariantCulture;
        CultureInfo.DefaultThreadCurrentUICulture = CultureInfo.InvariantCulture;
    }
}
