using System.Globalization;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>A decomposition that did not succeed although its input was finite. Carries the routine and its code.</summary>
public sealed class LinearAlgebraException : Exception
{
    /// <summary>Reports a routine's failure.</summary>
    /// <param name="routine">The routine's name, e.g. "zheevd".</param>
    /// <param name="code">What it returned: &gt; 0 did not converge, &lt; 0 refused its argument number −code.</param>
    public LinearAlgebraException(string routine, int code)
        : base(string.Create(CultureInfo.InvariantCulture, $"{routine} {(code > 0 ? "did not converge" : "refused an argument")} (info = {code})."))
    {
        Routine = routine;
        Code = code;
    }

    /// <summary>The routine's name.</summary>
    public string Routine { get; }

    /// <summary>What the routine returned.</summary>
    public int Code { get; }
}
