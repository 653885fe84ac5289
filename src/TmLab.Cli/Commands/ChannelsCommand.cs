using System.CommandLine;
using TmLab.Channels;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab channels t.h5 -o c.h5</c></summary>
internal sealed class ChannelsCommand : ToolCommand
{
    private readonly Argument<string> _input = PathOptions.Input("MATRIX", "The matrix file that 'reconstruct' wrote.");
    private readonly Option<string> _output = PathOptions.Output("The channel file to write.");

    public ChannelsCommand(IStages stages, CommandRunner runner)
        : base("channels", "Find the channels of a matrix and compare their spectrum with theory.", "channels t.h5 -o c.h5")
    {
        Add(_input);
        Add(_output);
        PathOptions.RefuseSamePath(this, _input, _output);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    /// <summary>Does the stage and reports on it; also used by the commands that do all stages.</summary>
    public static ChannelsReport Execute(IStages stages, ChannelsRequest request, StageContext context)
    {
        (ChannelFacts facts, double elapsedS) = Stopwatch.Time(() => stages.FindChannels(request, context));
        return ChannelsReport.From(request.Input, request.Output, facts, elapsedS);
    }

    private ChannelsRequest ReadRequest(ParseResult parse) => new(parse.GetRequiredValue(_input), parse.GetRequiredValue(_output));
}
