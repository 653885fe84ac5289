namespace TmLab.Simulation;

/// <summary>
/// A scattering medium: where its transmission matrix comes from. A medium gives the matrix between the macro-pixels and the
/// points of the pupil; the bench scales it to the wanted light level and takes it to the camera. A new medium is one new file.
/// </summary>
public abstract record Medium
{
    private protected Medium()
    {
    }

    /// <summary>Whether the matrix looks the same in any basis of the output, so that an open pupil needs no transform.</summary>
    internal virtual bool OutputIsIsotropic => true;

    /// <summary>Draws the matrix.</summary>
    /// <param name="shape">The macro-pixels and the pupil.</param>
    /// <param name="streams">Random numbers.</param>
    /// <param name="realisation">0 for the medium at the start, 1 for the independent one it decorrelates towards.</param>
    /// <param name="options">Threads and cancellation.</param>
    /// <param name="target">Receives it: row = macro-pixel, column = pupil point.</param>
    /// <returns>The mean of |t|² that the law of the medium predicts.</returns>
    internal abstract double Draw(
        MediumShape shape, RandomStreams streams, int realisation, ParallelOptions options, FieldPlanes target);
}
