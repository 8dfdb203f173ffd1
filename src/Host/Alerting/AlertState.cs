namespace Lampwarden.Host.Alerting;

/// <summary>
/// States of an alarm after IEC 62682 / ISA-18.2 (the set as their public summaries give it). Suppression by design is
/// the watch's business (it raises no finding while it learns); a meter taken out of service is taken out of the configuration.
/// </summary>
public enum AlertState
{
    /// <summary>Gone and known: nothing left to do.</summary>
    Normal,

    /// <summary>The condition stands and nobody has acknowledged it.</summary>
    Unacknowledged,

    /// <summary>The condition stands and somebody knows.</summary>
    Acknowledged,

    /// <summary>The condition went away before anybody acknowledged it.</summary>
    ReturnedUnacknowledged,

    /// <summary>As before, for an alert that a person must reset after looking.</summary>
    LatchedUnacknowledged,

    /// <summary>Gone and acknowledged, but not yet reset by a person.</summary>
    LatchedAcknowledged,

    /// <summary>Put aside by a person for a limited time; comes back by itself.</summary>
    Shelved,
}
