using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording.Writing;

namespace Lampwarden.Host.Recording;

/// <summary>
/// Takes what one run brings. Nothing here waits for the disk but <see cref="FlushAsync"/> and <see cref="EndAsync"/>; what does
/// not fit the queue is refused (false), counted, and appears in the run as a gap of reason not-stored. Safe for several threads.
/// </summary>
public sealed class RunRecorder
{
    private readonly StoreWriter _writer;
    private readonly ActiveRun _run;

    internal RunRecorder(StoreWriter writer, ActiveRun run) => (_writer, _run) = (writer, run);

    /// <summary>The run's id.</summary>
    public string Run => _run.Id;

    /// <summary>Entries of this run lost so far and not yet noted in the run itself.</summary>
    public long Lost => _run.Loss.Count;

    /// <summary>Appends a reading or an overload. Seconds must not decrease within a run.</summary>
    /// <returns>False: refused and counted, because the disk has been unable to take more for a long time.</returns>
    public bool Append(in LineReading reading) =>
        _writer.Queue.TryAdd(new WriteItem(_run, reading, null)) || Lose(reading.Seconds);

    /// <summary>
    /// Appends a missed poll. The stream keeps each, so that a replay sees what the watch saw; misses of one reason with no
    /// reading between them are one gap, from the last reading before to the first after.
    /// </summary>
    /// <param name="reason">Kebab-case, such as no-answer.</param>
    /// <param name="detail">What was seen; that of a gap's first miss is kept.</param>
    public bool AppendMissed(double seconds, string reason, string? detail = null) =>
        AppendMissed(new LineReading(seconds, double.NaN), reason, detail);

    /// <summary>As above, where the mains was read although the line current was not.</summary>
    /// <param name="missed">Its amps are NaN.</param>
    public bool AppendMissed(in LineReading missed, string reason, string? detail = null)
    {
        var kept = missed;
        return Add(kept.Seconds, batch => batch.AddMissed(_run, kept, reason, detail), important: false);
    }

    /// <summary>Appends a step in the life of a finding.</summary>
    public bool AppendFinding(double seconds, FindingChange change) =>
        Add(seconds, batch => RunRows.Write(batch, _run.Key, seconds, change));

    /// <summary>Appends a step in the life of an alert. Await <see cref="FlushAsync"/> before anybody is told of it.</summary>
    public bool AppendAlert(StoredAlertChange change) => Add(change.Seconds, batch => RunRows.Write(batch, _run.Key, change));

    /// <summary>Appends what the watch was told.</summary>
    public bool AppendAnnouncement(StoredAnnouncement told) => Add(told.Seconds, batch => RunRows.Write(batch, _run.Key, told));

    /// <summary>Has everything appended so far put on disk, at once.</summary>
    /// <returns>True: it is on disk. False: it is not, and <see cref="StoreHealth.Trouble"/> says why; it stays queued and is tried again.</returns>
    public async Task<bool> FlushAsync(CancellationToken cancellationToken = default)
    {
        var action = new StoreAction(null) { Hurry = true, GiveUpOnTrouble = true };
        return _writer.Queue.TryAdd(new WriteItem(null, default, action))
            && await action.Done.WaitAsync(cancellationToken) is null;
    }

    /// <summary>Ends the run. Nothing may be appended afterwards.</summary>
    /// <returns>True: the run is on disk whole, with its verdict. False: as for <see cref="FlushAsync"/>.</returns>
    public async Task<bool> EndAsync(RunEnd end, CancellationToken cancellationToken = default)
    {
        var action = new StoreAction(batch =>
        {
            _run.End = end;
            batch.Touched.Add(_run);
        })
        { Hurry = true };
        return _writer.Queue.TryAdd(new WriteItem(null, default, action))
            && await action.Done.WaitAsync(cancellationToken) is null;
    }

    /// <summary>Gaps, finding changes, alert changes and announcements of a run recorded elsewhere, as they were.</summary>
    internal bool AppendStored(RunRecord record) => Add(0, batch =>
    {
        foreach (var gap in record.Gaps)
        {
            batch.Run(
                "INSERT INTO gaps (run, from_ms, to_ms, reason, detail, polls) VALUES (?,?,?,?,?,?)",
                _run.Key, StoreBatch.Milliseconds(gap.FromSeconds), StoreBatch.Milliseconds(gap.ToSeconds), gap.Reason, gap.Detail, gap.Polls);
        }

        foreach (var change in record.FindingChanges)
        {
            RunRows.Write(batch, _run.Key, change.Seconds, change.Change);
        }

        foreach (var change in record.AlertChanges)
        {
            RunRows.Write(batch, _run.Key, change);
        }

        foreach (var told in record.Announcements)
        {
            RunRows.Write(batch, _run.Key, told);
        }

        batch.Run("UPDATE runs SET lost=? WHERE run=?", record.Info.Lost, _run.Key);
    });

    private bool Add(double seconds, Action<StoreBatch> apply, bool important = true) =>
        _writer.Queue.TryAdd(new WriteItem(null, default, new StoreAction(apply) { Important = important })) || Lose(seconds);

    private bool Lose(double seconds)
    {
        _run.NoteLoss(seconds);
        return false;
    }
}
