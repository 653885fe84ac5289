using System.Collections.Immutable;
using System.Reflection;
using System.Runtime.InteropServices;
using TmLab.Cli.Help;
using TmLab.Cli.Output;

namespace TmLab.Cli.Reports;

/// <summary>The program, what it runs on and what it stands on: to be added to a report of a fault.</summary>
internal sealed record AboutReport(
    string Version,
    string Runtime,
    string OperatingSystem,
    string Architecture,
    int ProcessorCount,
    long AvailableMemoryBytes,
    ImmutableArray<EngineSection> Engines,
    ImmutableArray<LibrarySection> Libraries) : Report
{
    /// <summary>The libraries shipped with the program: assembly, use, licence.</summary>
    private static readonly (string Assembly, string Use, string Licence)[] Shipped =
    [
        ("PureHDF", "HDF5 files", "MIT"),
        ("MathNet.Numerics", "managed linear algebra", "MIT"),
        ("SixLabors.ImageSharp", "PNG and BMP images", "Apache-2.0"),
        ("BitMiracle.LibTiff.NET", "TIFF stacks", "BSD-3-Clause"),
        ("System.IO.Hashing", "checksums", "MIT"),
        ("System.CommandLine", "the command line", "MIT"),
    ];

    protected override string Subject => "about";

    public static AboutReport Collect(ImmutableArray<EngineSection> engines) => new(
        VersionFlag.Version,
        RuntimeInformation.FrameworkDescription,
        RuntimeInformation.OSDescription,
        RuntimeInformation.ProcessArchitecture.ToString(),
        Environment.ProcessorCount,
        GC.GetGCMemoryInfo().TotalAvailableMemoryBytes,
        engines,
        [.. Shipped.Select(s => new LibrarySection(s.Assembly, LibraryVersion(s.Assembly), s.Use, s.Licence))]);

    public override void WriteText(TextReport text)
    {
        text.Heading($"{CommandLine.ProgramName} {Version}");
        text.Row("runtime", $"{Runtime} on {OperatingSystem}, {Architecture}");
        text.Row("processors", TextReport.Count(ProcessorCount));
        text.Row("memory", Options.ByteSize.Format(AvailableMemoryBytes));
        Engines.ToList().ForEach(e => text.Row($"engine {e.Name}", e.Description));
        Libraries.ToList().ForEach(l => text.Row(l.Name, $"{l.Version}, for {l.Use} ({l.Licence})"));
    }

    private static string LibraryVersion(string assembly)
    {
        Assembly loaded = Assembly.Load(new AssemblyName(assembly));
        string? full = loaded.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion;
        return full?.Split('+')[0] ?? loaded.GetName().Version?.ToString() ?? "unknown";
    }
}

/// <summary>A linear-algebra engine, and whether it can be used here.</summary>
internal sealed record EngineSection(string Name, bool Available, string Description);

/// <summary>A library that is shipped with the program.</summary>
internal sealed record LibrarySection(string Name, string Version, string Use, string Licence);
