namespace Lampwarden.Analysis.Uncertainty;

/// <summary>How the possible values of an input are spread (JCGM 100, 4.3).</summary>
public enum InputShape
{
    /// <summary>Normal: a standard uncertainty from experience.</summary>
    Normal,

    /// <summary>Equally likely between two bounds, and never outside.</summary>
    Rectangular,
}
