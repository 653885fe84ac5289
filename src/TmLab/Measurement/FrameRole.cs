namespace TmLab.Measurement;

/// <summary>What a frame shows.</summary>
public enum FrameRole
{
    /// <summary>A pattern of the basis at one phase step.</summary>
    Mode,

    /// <summary>A pattern shown again and again to follow drift.</summary>
    Tracker,

    /// <summary>No light at all.</summary>
    Dark,

    /// <summary>The reference alone (signal arm blocked).</summary>
    Reference,

    /// <summary>The signal alone (reference arm blocked).</summary>
    Blank,
}
