using System.Reflection;
using TmLab.Failures;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// The one place where whatever the HDF5 library throws at a damaged file becomes a <see cref="BadInputException"/> that names file
/// and place. The library throws untyped exceptions of every kind, so that everything but our own failures and a cancellation counts.
/// </summary>
internal static class DamagedFiles
{
    private const string Remedy = "make the file anew from its parent, or restore it from a copy";

    /// <summary>Runs a step of reading.</summary>
    /// <exception cref="BadInputException">The step failed.</exception>
    public static T Guard<T>(string file, string? place, Func<T> step)
    {
        try
        {
            return step();
        }
        catch (Exception e) when (IsForeign(e))
        {
            throw Translate(file, place, e);
        }
    }

    /// <summary>Whether an exception thrown while reading means damage, as opposed to our own failures and a cancellation.</summary>
    public static bool IsForeign(Exception thrown) => Unwrap(thrown) is not (TmLabException or OperationCanceledException);

    /// <summary>The exception for one that the library or the operating system threw.</summary>
    public static BadInputException Translate(string file, string? place, Exception thrown)
    {
        Exception cause = Unwrap(thrown);
        return new BadInputException(file, place, $"is damaged ({cause.Message.TrimEnd('.')})", Remedy, cause);
    }

    /// <summary>Makes the exception for damage that we found ourselves.</summary>
    /// <param name="file">The file.</param>
    /// <param name="place">The dataset or attribute; null for the whole file.</param>
    /// <param name="found">What is wrong, with the numbers found.</param>
    public static BadInputException Damaged(string file, string? place, string found) => new(file, place, found, Remedy);

    // The library calls its own generic methods through reflection and reads through tasks.
    private static Exception Unwrap(Exception thrown) => thrown switch
    {
        TargetInvocationException { InnerException: { } inner } => Unwrap(inner),
        AggregateException { InnerException: { } inner } => Unwrap(inner),
        _ => thrown,
    };
}
