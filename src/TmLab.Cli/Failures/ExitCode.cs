namespace TmLab.Cli.Failures;

/// <summary>What the program tells its caller by its exit code.</summary>
internal enum ExitCode
{
    /// <summary>The work was done.</summary>
    Fine = 0,

    /// <summary>The work failed although its input was acceptable, or the program has a fault.</summary>
    Failed = 1,

    /// <summary>The command line is wrong.</summary>
    Usage = 2,

    /// <summary>The input cannot be used.</summary>
    BadInput = 3,

    /// <summary>The work was done, and the quality asked for was not reached.</summary>
    QualityGate = 4,

    /// <summary>An output cannot be written or would overwrite.</summary>
    Output = 5,

    /// <summary>The user or the system asked the program to stop (128 + SIGINT).</summary>
    Interrupted = 130,
}
