namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Which linear-algebra engine a user asks for.</summary>
public enum EngineChoice
{
    /// <summary>The native one if a working library is found, else the managed one.</summary>
    Auto,

    /// <summary>The engine written in C#, always there.</summary>
    Managed,

    /// <summary>LAPACK and BLAS of the system; it is an error if they are not there.</summary>
    Native,
}
