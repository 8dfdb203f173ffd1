using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>Carrying on what an earlier service left off.</summary>
public sealed partial class Soak
{
    /// <summary>Page, routes and cut-off have been told nothing yet of what was found before the service was left off.</summary>
    private void TellWhatStands()
    {
        foreach (var finding in _ledger.Watch.Findings.Where(finding => finding.ClearedSeconds is null))
        {
            Tell(new FindingChanged(_plan.Name, _ledger.LastSeconds, new FindingChange(ChangeKind.Amended, finding)));
        }

        foreach (var alert in _alerts.Alerts.Where(alert => alert.IsOpen))
        {
            Publish(new AlertChange(_ledger.LastSeconds, AlertSteps.CarriedOn, alert));
        }
    }

    /// <summary>Sets the clock and the watch to where the earlier run was left off.</summary>
    /// <returns>Seconds of its last entry.</returns>
    private double CarryOn(SoakResumption resumption, in BenchLook look)
    {
        var leftOff = resumption.Replay(_ledger);
        resumption.TakeOver(_alerts, _ledger);
        // The monotonic clock does not outlive the process. A wall clock set back must not make the soak's time go backwards.
        var nowSeconds = Math.Max(leftOff + _plan.LineMeter.WindowSeconds, (look.Utc - resumption.StartedUtc).TotalSeconds);
        _originSeconds = look.ElapsedSeconds - nowSeconds;
        _excusedUntilSeconds = nowSeconds + ReopeningSeconds;
        return leftOff;
    }

    /// <summary>The watch sees the service's own absence as a silent meter; it is put on record as what it was, and wakes nobody.</summary>
    private IReadOnlyList<FindingChange> Excuse(IReadOnlyList<FindingChange> changes)
    {
        if (changes.Count == 0 || !(_ledger.LastSeconds < _excusedUntilSeconds))
        {
            return changes;
        }

        return [.. changes.Select(change => change.Finding.Signature != Signature.MeterSilent ? change : change with
        {
            Finding = change.Finding with { Severity = Severity.Notice, Explanation = "The service itself did not run, so nothing was watched: see the gap." },
        })];
    }
}
