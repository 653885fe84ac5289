namespace TmLab.Failures;

/// <summary>Why an output could not be written.</summary>
public enum OutputFailure
{
    /// <summary>A file of that name exists and overwriting was not asked for.</summary>
    Exists,

    /// <summary>The folder cannot be written to.</summary>
    NotWritable,

    /// <summary>The disk is full.</summary>
    DiskFull,

    /// <summary>Another process is writing the same output.</summary>
    Busy,

    /// <summary>Reading back what was written gave something else.</summary>
    Corrupted,
}

/// <summary>An output that cannot be written or would overwrite (exit code 5). Nothing stands under the final name that was not there before.</summary>
public sealed class OutputException : TmLabException
{
    /// <summary>Reports a failure.</summary>
    /// <param name="file">The output's final name.</param>
    /// <param name="failure">The kind of failure.</param>
    /// <param name="remedy">What the user can do, imperative, without a full stop.</param>
    /// <param name="inner">The cause, if an exception was.</param>
    public OutputException(string file, OutputFailure failure, string remedy, Exception? inner = null)
        : base($"{file}: {Describe(failure)}; {remedy}", inner)
    {
        File = file;
        Failure = failure;
    }

    /// <summary>The output's final name.</summary>
    public string File { get; }

    /// <summary>The kind of failure.</summary>
    public OutputFailure Failure { get; }

    private static string Describe(OutputFailure failure) => failure switch
    {
        OutputFailure.Exists => "already exists",
        OutputFailure.NotWritable => "cannot be written",
        OutputFailure.DiskFull => "the disk is full",
        OutputFailure.Busy => "is being written by another process",
        _ => "reads back differently from what was written",
    };
}
