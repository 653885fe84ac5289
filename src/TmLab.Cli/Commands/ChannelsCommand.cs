using System.CommandLine;
using System.Globalization;
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

    private readonly Option<bool> _valuesOnly = new("--values-only") { Description = "Find the singular values only, without the channels' patterns." };

    private readonly Option<int?> _top = new("--top")
    {
        Description = "Find this many leading channels only, each singular value with an error bound.",
        HelpName = "COUNT",
    };

    public ChannelsCommand(IStages stages, CommandRunner runner)
        : base("channels", "Find the channels of a matrix and compare their spectrum with theory.", "channels t.h5 -o c.h5")
    {
        Add(_input);
        Add(_output);
        Add(_valuesOnly);
        Add(_top);
        _top.Validators.Add(result => RefuseNonPositive(result.Tokens.Select(t => t.Value).LastOrDefault(), result.AddError));
        PathOptions.RefuseSamePath(this, _input, _output);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    /// <summary>Does the stage and reports on it; also used by the commands that do all stages.</summary>
    public static ChannelsReport Execute(IStages stages, ChannelsRequest request, StageContext context)
    {
        (ChannelFacts facts, double elapsedS) = Stopwatch.Time(() => stages.FindChannels(request, context));
        return ChannelsReport.From(request.Input, request.Output, facts, elapsedS);
    }

    private static void RefuseNonPositive(string? text, Action<string> refuse)
    {
        if (!int.TryParse(text, NumberStyles.None, CultureInfo.InvariantCulture, out int count) || count < 1)
        {
            refuse($"--top {text}: give a whole number of channels, 1 or more");
        }
    }

    private ChannelsRequest ReadRequest(ParseResult parse) => new(
        parse.GetRequiredValue(_input),
        parse.GetRequiredValue(_output),
        parse.GetValue(_valuesOnly) ? 0 : parse.GetValue(_top));
}
