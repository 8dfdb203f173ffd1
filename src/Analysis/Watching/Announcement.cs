namespace Lampwarden.Analysis.Watching;

/// <summary>What a user tells the watch while it runs.</summary>
public enum AnnouncementKind
{
    /// <summary>The unit's load was changed (volume turned up, heater set higher): a new level is to be learned.</summary>
    LoadChanged,

    /// <summary>A lamp of the bank was switched in or out.</summary>
    LampSwitched,

    /// <summary>The unit switches by itself (thermostat, compressor): its on and off levels are healthy.</summary>
    CyclesByItself,

    /// <summary>The meter's range or scale was changed.</summary>
    MeterChanged,
}

/// <summary>One thing told to the watch.</summary>
/// <param name="Kind">What was done.</param>
/// <param name="Detail">The user's own words, or the lamp's name; kept with the run.</param>
/// <param name="Expectation">The new prediction, where the change has one; null keeps the present one for a meter or cycling announcement and drops it for a load change.</param>
public sealed record Announcement(AnnouncementKind Kind, string? Detail = null, Expectation? Expectation = null);
