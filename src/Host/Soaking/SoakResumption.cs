using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// An earlier run that the service left off and a new one carries on: same soak, same clock. Its readings are weighed again
/// from the store, so the watch knows what it knew, whatever version of the program wrote them.
/// </summary>
public sealed class SoakResumption
{
    /// <summary>Written among the reasons of a run that ended because the service did.</summary>
    public const string StoppedReason = "The service was stopped before the planned end.";

    /// <summary>The reason of the gap between the two runs.</summary>
    public const string GapReason = "service-down";

    private readonly SoakStore _store;
    private readonly IReadOnlyList<RunRecord> _runs;

    private SoakResumption(SoakStore store, IReadOnlyList<RunRecord> runs) => (_store, _runs) = (store, runs);

    /// <summary>The run that was left off.</summary>
    public RunInfo Last => _runs[^1].Info;

    /// <summary>When the soak began, however many runs it has been recorded in.</summary>
    public DateTimeOffset StartedUtc => _runs[0].Info.StartedUtc;

    /// <summary>What the watch was told in all the runs of the soak.</summary>
    public IReadOnlyList<StoredAnnouncement> Announcements => [.. _runs.SelectMany(run => run.Announcements)];

    /// <summary>Finds what is to be carried on at a bench.</summary>
    /// <param name="store">Open for recording.</param>
    /// <param name="bench">Which.</param>
    /// <param name="within">Longest time since it was left off: a unit that has cooled down is another soak.</param>
    /// <param name="now">Wall time.</param>
    /// <returns>Null where the bench's last run ended otherwise, or too long ago, or its time is over.</returns>
    public static SoakResumption? Find(SoakStore store, string bench, TimeSpan within, DateTimeOffset now)
    {
        var last = store.Runs(new RunFilter(Bench: bench)).OrderBy(run => run.StartedUtc).ThenBy(run => run.Run, StringComparer.Ordinal).LastOrDefault();
        if (last is not { EndedUtc: { } ended } || now - ended > within || last.LengthSeconds >= last.PlannedHours * 3600)
        {
            return null;
        }

        var runs = new List<RunRecord> { store.Run(last.Run) };
        if (!runs[0].Reasons.Any(reason => reason is StoppedReason or SoakStore.InterruptedReason))
        {
            return null;
        }

        // A run may be linked to an interrupted one and yet have begun anew: only the same soak has the same beginning.
        while (runs[0].Info.ResumedFrom is { } earlier && store.Run(earlier) is { } before && before.Info.StartedUtc == runs[0].Info.StartedUtc)
        {
            runs.Insert(0, before);
        }

        return new SoakResumption(store, runs);
    }

    /// <summary>Weighs the earlier readings again, and tells the watch again what it was told.</summary>
    /// <returns>Seconds of the last of them.</returns>
    public double Replay(SoakLedger ledger)
    {
        var told = new AnnouncementReplay(Announcements);
        foreach (var run in _runs)
        {
            foreach (var reading in _store.Readings(run.Info.Run))
            {
                var reason = reading.IsMissing ? run.Gaps.LastOrDefault(gap => gap.FromSeconds <= reading.Seconds)?.Reason ?? GapReason : "";
                told.Before(reading.Seconds, ledger);
                ledger.Take(new Observation(reading.Seconds, reading.Amps, reading.MainsVolts), reason);
            }
        }

        told.Before(double.PositiveInfinity, ledger);
        return ledger.LastSeconds;
    }

    /// <summary>Takes over the alerts as they were left.</summary>
    public void TakeOver(AlertBook book, SoakLedger ledger)
    {
        // A resumed run stored the alerts it took over only when they changed: the latest word of any run counts.
        var latest = new Dictionary<int, Alert>();
        foreach (var stored in _runs.SelectMany(run => run.AlertChanges))
        {
            if (stored.Json is { } json && JsonSerializer.Deserialize<AlertChange>(json, Json.Compact) is { } change)
            {
                latest[change.Alert.Number] = change.Alert;
            }
        }

        book.TakeOver(latest.Values, ledger.Watch.Findings, ledger.LastSeconds);
    }
}
