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

    /// <summary>Takes over the open alerts of a run that is carried on, on the same clock.</summary>
    /// <param name="alerts">As last stored, in any order.</param>
    /// <param name="findings">What the watch has found up to now: says which conditions still stand.</param>
    /// <param name="seconds">Now.</param>
    public void TakeOver(IEnumerable<Alert> alerts, IEnumerable<Finding> findings, double seconds)
    {
        var standing = findings.Where(finding => finding.ClearedSeconds is null).ToDictionary(finding => finding.Number);
        foreach (var alert in alerts.OrderBy(alert => alert.Number))
        {
            _numbers = Math.Max(_numbers, alert.Number);
            var stands = alert.FindingNumber is { } number && standing.ContainsKey(number);
            if (!alert.IsOpen)
            {
                continue;
            }

            var entry = new AlertEntry(alert with { Standing = stands });
            if (stands)
            {
                _byFinding[alert.FindingNumber!.Value] = entry;
            }
            else if (alert.State is AlertState.Unacknowledged or AlertState.Acknowledged)
            {
                entry.OffDueSeconds = seconds + _rules.OffDelaySeconds;
            }

            if (alert.IsUnacknowledged)
            {
                PlanRepeat(entry, seconds);
            }

            _entries.Add(entry);
        }
    }

    /// <summary>Closes whatever is open: its run is over, and another begins.</summary>
    public IReadOnlyList<AlertChange> CloseAll(double seconds)
    {
        _entries.RemoveAll(entry => entry.IsPending);
        var changes = new List<AlertChange>();
        foreach (var entry in _entries.Where(entry => entry.Alert.IsOpen))
        {
            entry.Alert = entry.Alert with { State = AlertState.Normal, Standing = false, ShelvedUntilSeconds = null };
            changes.Add(new AlertChange(seconds, AlertSteps.Closed, entry.Alert));
        }

        return changes;
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
