using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Stages;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab check t.h5 --require fidelity=0.95</c></summary>
internal sealed class CheckCommand : ToolCommand
{
    private readonly Argument<string> _input = PathOptions.Input("FILE", "A matrix file; with --verify any stage file.");
    private readonly Option<string[]> _require = RequireOption.Create();
    private readonly Option<bool> _verify = new("--verify") { Description = "Compare all data with the checksums in the file." };

    public CheckCommand(IStages stages, CommandRunner runner)
        : base("check", "Judge how far a matrix can be trusted, and what to change at the bench.", "check t.h5 --require fidelity=0.95")
    {
        Add(_input);
        Add(_require);
        Add(_verify);
        SetAction(parse => (int)runner.Run(parse, context => stages.Check(ReadRequest(parse), context)));
    }

    private CheckRequest ReadRequest(ParseResult parse) =>
        new(parse.GetRequiredValue(_input), parse.GetValue(_verify), RequireOption.Read(parse, _require));
}
