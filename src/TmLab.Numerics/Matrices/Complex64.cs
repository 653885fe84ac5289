using System.Globalization;
using System.Numerics;
using System.Runtime.InteropServices;

namespace TmLab.Numerics.Matrices;

/// <summary>
/// A complex number of two single-precision parts, laid out in memory as the pair (r, i). The field names are those that
/// HDF5 readers of complex compounds expect, so that a stored array of this struct opens as complex64 elsewhere.
/// </summary>
[StructLayout(LayoutKind.Sequential, Pack = 4)]
public readonly struct Complex64 : IEquatable<Complex64>
{
    /// <summary>The real part.</summary>
    public readonly float r;

    /// <summary>The imaginary part.</summary>
    public readonly float i;

    /// <summary>Makes a number from its parts.</summary>
    public Complex64(float real, float imaginary)
    {
        r = real;
        i = imaginary;
    }

    /// <summary>r² + i², in single precision.</summary>
    public float SquaredMagnitude => (r * r) + (i * i);

    /// <summary>Whether neither part is NaN or infinite.</summary>
    public bool IsFinite => float.IsFinite(r) && float.IsFinite(i);

    /// <summary>Rounds a double-precision number to single precision.</summary>
    public static explicit operator Complex64(Complex value) => new((float)value.Real, (float)value.Imaginary);

    /// <summary>Widens to double precision; exact.</summary>
    public static implicit operator Complex(Complex64 value) => new(value.r, value.i);

    /// <summary>Equality of both parts.</summary>
    public static bool operator ==(Complex64 left, Complex64 right) => left.Equals(right);

    /// <summary>Inequality of either part.</summary>
    public static bool operator !=(Complex64 left, Complex64 right) => !left.Equals(right);

    /// <summary>Widens to double precision; exact.</summary>
    public Complex ToComplex() => this;

    /// <summary>Rounds a double-precision number to single precision.</summary>
    public static Complex64 FromComplex(Complex value) => (Complex64)value;

    /// <inheritdoc/>
    public bool Equals(Complex64 other) => r.Equals(other.r) && i.Equals(other.i);

    /// <inheritdoc/>
    public override bool Equals(object? obj) => obj is Complex64 other && Equals(other);

    /// <inheritdoc/>
    public override int GetHashCode() => HashCode.Combine(r, i);

    /// <inheritdoc/>
    public override string ToString() => string.Create(CultureInfo.InvariantCulture, $"{r:G9}{(i < 0 ? "" : "+")}{i:G9}i");
}
