namespace TmLab.Matrix;

/// <summary>Why a row may not be used. The numbers stand in matrix files.</summary>
public enum PixelReason
{
    /// <summary>The row may be used.</summary>
    None = 0,

    /// <summary>At full scale in too many frames.</summary>
    Saturated = 1,

    /// <summary>At or near full scale in the dark, or in practically all frames.</summary>
    Hot = 2,

    /// <summary>No variation at all, or practically no light where its neighbours have some.</summary>
    Dead = 3,

    /// <summary>The reference does not stand out of its own noise.</summary>
    LittleReference = 4,

    /// <summary>Fringes far weaker than those of the other pixels.</summary>
    LowVisibility = 5,
}
