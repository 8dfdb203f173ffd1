using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting.Life;

namespace Lampwarden.Host.Alerting;

/// <summary>What people do with alerts, and what a restart takes over.</summary>
public sealed partial class AlertBook
{
    /// <summary>A person has seen an alert.</summary>
    /// <returns>The change; null where there is no such alert or there is nothing to acknowledge.</returns>
    public AlertChange? Acknowledge(int number, double seconds, string? by = null) =>
        ByPerson(number, AlertEvent.Acknowledge, AlertSteps.Acknowledged, seconds, by, null);

    /// <summary>A person releases a latched alert after its condition is gone and it was acknowledged.</summary>
    /// <returns>The change; null where there is no such alert or it is not ready to be reset.</returns>
    public AlertChange? Reset(int number, double seconds, string? by = null, string? reason = null) =>
        ByPerson(number, AlertEvent.Reset, AlertSteps.Reset, seconds, by, reason);

    /// <summary>A person puts an alert aside for a time; it comes back by itself, or at once if it grows worse.</summary>
    /// <param name="number">Which.</param>
    /// <param name="forSeconds">How long; above 0, cut to the longest time the rules allow.</param>
    /// <param name="seconds">Now.</param>
    /// <param name="by">Who.</param>
    /// <param name="reason">Why, in their words.</param>
    /// <returns>The change; null where there is no such open alert.</returns>
    public AlertChange? Shelve(int number, double forSeconds, double seconds, string? by = null, string? reason = null)
    {
        if (!(forSeconds > 0) || Numbered(number) is not { } entry || entry.Alert.State == AlertState.Shelved)
        {
            return null;
        }

        entry.Alert = entry.Alert with { ShelvedUntilSeconds = seconds + Math.Min(forSeconds, _rules.LongestShelfSeconds) };
        var change = ByPerson(number, AlertEvent.Shelve, AlertSteps.Shelved, seconds, by, reason);
        if (change is null)
        {
            entry.Alert = entry.Alert with { ShelvedUntilSeconds = null };
        }

        return change;
    }

    /// <summary>A person takes an alert from the shelf before its time.</summary>
    public AlertChange? Unshelve(int number, double seconds, string? by = null) =>
        Numbered(number) is { Alert.State: AlertState.Shelved } entry ? LeaveShelf(entry, seconds, by) : null;

    /// <summary>
    /// Takes over the open alerts of an interrupted run. Their conditions are taken as standing until the off-delay has
    /// passed without them: the watch raises again what is still there.
    /// </summary>
    /// <param name="alerts">As last stored, in any order.</param>
    /// <param name="earlierSeconds">Seconds between the start of the interrupted run and the start of this one.</param>
    public void TakeOver(IEnumerable<Alert> alerts, double earlierSeconds)
    {
        foreach (var alert in alerts.Where(alert => alert.IsOpen).OrderBy(alert => alert.Number))
        {
            var entry = new AlertEntry(alert with
            {
                FindingNumber = null,
                Standing = false,
                RaisedSeconds = alert.RaisedSeconds - earlierSeconds,
                ShelvedUntilSeconds = alert.ShelvedUntilSeconds - earlierSeconds,
            })
            {
                OffDueSeconds = alert.State is AlertState.Unacknowledged or AlertState.Acknowledged or AlertState.Shelved
                    ? _rules.OffDelaySeconds
                    : double.NaN,
            };
            if (alert.IsUnacknowledged)
            {
                PlanRepeat(entry, 0);
            }

            _numbers = Math.Max(_numbers, alert.Number);
            _entries.Add(entry);
        }
    }

    private AlertChange? ByPerson(int number, AlertEvent happened, string what, double seconds, string? by, string? reason)
    {
        if (Numbered(number) is not { } entry || Step(entry, happened, what, seconds) is not { } change)
        {
            return null;
        }

        entry.Alert = change.Alert with { By = by };
        return change with { Alert = entry.Alert, By = by, Reason = reason };
    }

    private AlertChange? LeaveShelf(AlertEntry entry, double seconds, string? by)
    {
        entry.Alert = entry.Alert with { ShelvedUntilSeconds = null, Repeats = 0 };
        // The off-delay may have passed on the shelf, or be under way: either way the condition itself decides.
        entry.OffDueSeconds = double.NaN;
        var change = Step(entry, AlertEvent.Unshelve, AlertSteps.Unshelved, seconds);
        PlanRepeat(entry, seconds);
        return change is null ? null : change with { By = by };
    }

    private AlertEntry? Numbered(int number) => _entries.Find(entry => entry.Alert.Number == number && !entry.IsPending);
}
