using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting;

/// <summary>
/// Keeps the alerts of one run: turns changes of findings, and what people do, into alert state changes.
/// Not thread-safe: owned by the soak's loop.
/// </summary>
public sealed class AlertBook(string bench)
{
    private readonly SortedDictionary<int, Alert> _alerts = [];

    /// <summary>Every alert of the run in its latest state.</summary>
    public IReadOnlyCollection<Alert> Alerts => _alerts.Values;

    /// <summary>Takes one change of a finding.</summary>
    /// <returns>The alert's change; null where a notice asks nobody to act.</returns>
    public AlertChange? Take(FindingChange change, double seconds)
    {
        var finding = change.Finding;
        var known = _alerts.TryGetValue(finding.Number, out var before);
        if (!known && (finding.Severity == Severity.Notice || change.Kind == ChangeKind.Cleared))
        {
            return null;
        }

        var (what, state) = (change.Kind, before?.State) switch
        {
            (ChangeKind.Cleared, AlertState.Acknowledged or AlertState.Normal) => ("returned", AlertState.Normal),
            (ChangeKind.Cleared, _) => ("returned", AlertState.ReturnedUnacknowledged),
            (_, null) => ("raised", AlertState.Unacknowledged),
            // A finding that grew worse after it was acknowledged must be acknowledged again.
            (_, AlertState.Acknowledged) when finding.Severity <= before!.Severity => ("amended", AlertState.Acknowledged),
            _ => ("amended", AlertState.Unacknowledged),
        };
        var alert = new Alert(bench, finding.Number, finding.Signature, finding.Severity, state, finding.RaisedSeconds, finding.Explanation);
        _alerts[finding.Number] = alert;
        return new AlertChange(seconds, what, alert);
    }

    /// <summary>A person has seen an alert.</summary>
    /// <returns>The change; null where there is no such alert or it was acknowledged before.</returns>
    public AlertChange? Acknowledge(int findingNumber, double seconds)
    {
        if (!_alerts.TryGetValue(findingNumber, out var alert) || alert.State is AlertState.Acknowledged or AlertState.Normal)
        {
            return null;
        }

        var state = alert.State == AlertState.ReturnedUnacknowledged ? AlertState.Normal : AlertState.Acknowledged;
        _alerts[findingNumber] = alert = alert with { State = state };
        return new AlertChange(seconds, "acknowledged", alert);
    }
}
