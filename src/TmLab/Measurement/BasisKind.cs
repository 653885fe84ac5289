namespace TmLab.Measurement;

/// <summary>The set of patterns that was shown; row k of the pattern matrix B is the field while pattern k is shown.</summary>
public enum BasisKind
{
    /// <summary>Sylvester–Hadamard patterns ±1: B[k, n] = (−1)^popcount(k &amp; n).</summary>
    Hadamard,

    /// <summary>On/off patterns (1 + H)/2 for amplitude modulators.</summary>
    HadamardBinary,

    /// <summary>Plane waves over the grid: B = exp(2πi (k1 n1 / N1 + k2 n2 / N2)).</summary>
    Fourier,

    /// <summary>One macro-pixel at a time: B is the identity.</summary>
    Pixel,

    /// <summary>A complex matrix given in a file.</summary>
    Custom,
}

/// <summary>The order in which Hadamard rows were numbered.</summary>
public enum HadamardOrdering
{
    /// <summary>Sylvester (natural) order.</summary>
    Natural,

    /// <summary>By rising number of sign changes along the row.</summary>
    Sequency,
}

/// <summary>Which arm of the interferometer carried the phase steps; it fixes the sign of the commanded step.</summary>
public enum SteppedArm
{
    /// <summary>The signal arm: the step adds to the signal's phase.</summary>
    Signal,

    /// <summary>The reference arm: the step subtracts from the signal's phase relative to the reference.</summary>
    Reference,
}
