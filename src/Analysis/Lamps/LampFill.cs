namespace Lampwarden.Analysis.Lamps;

/// <summary>What surrounds the filament; it decides the small losses that rule the dim end of the curve.</summary>
public enum LampFill
{
    /// <summary>Argon and nitrogen: general service lamps of 40 W and more, mostly.</summary>
    Gas,

    /// <summary>Evacuated: general service lamps of 25 W and less, mostly.</summary>
    Vacuum,

    /// <summary>No filament at all: a plain resistor in a lamp's place.</summary>
    Resistor,
}
