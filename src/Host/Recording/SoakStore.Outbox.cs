using Lampwarden.Host.Recording.Forwarding;

namespace Lampwarden.Host.Recording;

public sealed partial class SoakStore
{
    private const int ChangesAtATime = 500;

    /// <summary>What a server will never take, latest first.</summary>
    public IReadOnlyList<ParkedPoint> ParkedPoints(int most = 1000) => Read(reader => reader.List(
        "SELECT runs.id, utc_ms, reason, line FROM parked_points JOIN runs ON runs.run=parked_points.run ORDER BY point DESC LIMIT $most",
        row => new ParkedPoint(row.GetString(0), RunRows.Utc(row.GetInt64(1)), row.GetString(2), row.GetString(3)),
        ("$most", most)));

    /// <summary>The runs of which a target has not had everything, oldest first.</summary>
    internal IReadOnlyList<OutboxRun> Outbox(string target) => Read(reader => reader.List(
        """
        SELECT runs.run, id, bench, started_ms, ended_ms IS NOT NULL, coalesce(f.begun,0), coalesce(f.entries,0), coalesce(f.findings,0), coalesce(f.alerts,0)
        FROM runs LEFT JOIN forwarding f ON f.run=runs.run AND f.target=$target
        WHERE coalesce(f.ended,0)=0 ORDER BY runs.run
        """,
        row => new OutboxRun(
            row.GetInt64(0), row.GetString(1), InfluxPoints.Tag(row.GetString(2)), row.GetInt64(3), row.GetBoolean(4),
            new OutboxCursor(row.GetBoolean(5), row.GetInt64(6), row.GetInt64(7), row.GetInt64(8), false)),
        ("$target", target)));

    /// <summary>The next points of a run, about <paramref name="most"/> at most, and where the cursor stands once they are sent.</summary>
    internal (List<string> Points, OutboxCursor To) Collect(OutboxRun run, int most)
    {
        var points = new List<string>();
        var to = run.Cursor;
        if (!to.Begun)
        {
            points.Add(InfluxPoints.Begun(run, Run(run.Id).Info));
            to = to with { Begun = true };
        }

        to = CollectChanges(run, points, to);
        var head = InfluxPoints.ReadingHead(run);
        foreach (var (first, readings) in Stretches(run.Id, run.Key, to.Entries))
        {
            var taken = Math.Min(readings.Count, most - points.Count);
            foreach (ref readonly var reading in readings.AsSpan(0, Math.Max(0, taken)))
            {
                points.Add(InfluxPoints.Reading(head, run.StartedMs, reading));
            }

            to = to with { Entries = first + Math.Max(0, taken) };
            if (points.Count >= most)
            {
                return (points, to);
            }
        }

        // Only what had ended before its entries were read through is surely sent whole.
        if (run.IsEnded)
        {
            points.Add(InfluxPoints.Ended(run, Run(run.Id)));
            to = to with { Ended = true };
        }

        return (points, to);
    }

    internal Task MoveCursorsAsync(string target, IReadOnlyList<(OutboxRun Run, OutboxCursor To)> moved, CancellationToken cancellationToken) => DoAsync(
        batch =>
        {
            foreach (var (run, to) in moved)
            {
                batch.Run(
                    "INSERT OR REPLACE INTO forwarding (target, run, entries, findings, alerts, begun, ended) VALUES (?,?,?,?,?,?,?)",
                    target, run.Key, to.Entries, to.Findings, to.Alerts, to.Begun, to.Ended);
            }
        },
        cancellationToken);

    internal Task ParkAsync(string target, long run, string reason, IReadOnlyList<string> lines, CancellationToken cancellationToken) => DoAsync(
        batch =>
        {
            foreach (var line in lines)
            {
                batch.Run(
                    "INSERT INTO parked_points (target, run, utc_ms, reason, line) VALUES (?,?,?,?,?)",
                    target, run, _time.GetUtcNow().ToUnixTimeMilliseconds(), reason, line);
            }
        },
        cancellationToken);

    private OutboxCursor CollectChanges(OutboxRun run, List<string> points, OutboxCursor to)
    {
        var findings = Read(reader => reader.List(
            $"SELECT {RunRows.FindingColumns}, change FROM finding_changes WHERE run=$run AND change>$after ORDER BY change LIMIT {ChangesAtATime}",
            row => (Row: row.GetInt64(10), Change: RunRows.ReadFinding(row)),
            ("$run", run.Key), ("$after", to.Findings)));
        points.AddRange(findings.Select(found => InfluxPoints.Finding(run, found.Change)));
        var alerts = Read(reader => reader.List(
            $"SELECT {RunRows.AlertColumns}, change FROM alert_changes WHERE run=$run AND change>$after ORDER BY change LIMIT {ChangesAtATime}",
            row => (Row: row.GetInt64(8), Change: RunRows.ReadAlert(row)),
            ("$run", run.Key), ("$after", to.Alerts)));
        points.AddRange(alerts.Select(found => InfluxPoints.Alert(run, found.Change)));
        return to with
        {
            Findings = findings.Count > 0 ? findings[^1].Row : to.Findings,
            Alerts = alerts.Count > 0 ? alerts[^1].Row : to.Alerts,
        };
    }
}
