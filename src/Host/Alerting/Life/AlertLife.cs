namespace Lampwarden.Host.Alerting.Life;

/// <summary>What can happen to an alarm in the standard's state model.</summary>
public enum AlertEvent
{
    Raise,
    Return,
    Acknowledge,
    Reset,
    Shelve,
    Unshelve,
}

/// <summary>
/// The transitions of IEC 62682 / ISA-18.2 as a pure function: condition true, acknowledgement, condition gone, reset,
/// shelving. Delays, repeats and grouping are built around it (<see cref="AlertBook"/>).
/// </summary>
public static class AlertLife
{
    /// <summary>The state after an event.</summary>
    /// <param name="state">The state before.</param>
    /// <param name="happened">What happens.</param>
    /// <param name="standing">Whether the condition stands after the event; matters only when leaving the shelf.</param>
    /// <param name="latching">Whether a person must reset the alert after its condition went away.</param>
    /// <returns>The state after; the same where the event means nothing in this state.</returns>
    public static AlertState Next(AlertState state, AlertEvent happened, bool standing, bool latching) => (happened, state) switch
    {
        // A shelved alert keeps quiet whatever its condition does; its life goes on when it leaves the shelf.
        (AlertEvent.Unshelve, AlertState.Shelved) => standing ? AlertState.Unacknowledged
            : latching ? AlertState.LatchedUnacknowledged
            : AlertState.Normal,
        (_, AlertState.Shelved) => state,
        (AlertEvent.Shelve, not AlertState.Normal) => AlertState.Shelved,

        // A condition that comes back must be acknowledged again, whatever was known of its last visit.
        (AlertEvent.Raise, not AlertState.Acknowledged) => AlertState.Unacknowledged,

        (AlertEvent.Return, AlertState.Unacknowledged) => latching ? AlertState.LatchedUnacknowledged : AlertState.ReturnedUnacknowledged,
        (AlertEvent.Return, AlertState.Acknowledged) => latching ? AlertState.LatchedAcknowledged : AlertState.Normal,

        (AlertEvent.Acknowledge, AlertState.Unacknowledged) => AlertState.Acknowledged,
        (AlertEvent.Acknowledge, AlertState.ReturnedUnacknowledged) => AlertState.Normal,
        (AlertEvent.Acknowledge, AlertState.LatchedUnacknowledged) => AlertState.LatchedAcknowledged,

        // Reset only after both clearing and acknowledging: nobody releases what nobody has looked at.
        (AlertEvent.Reset, AlertState.LatchedAcknowledged) => AlertState.Normal,
        _ => state,
    };
}
