using System.Globalization;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording.Writing;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>Findings and alerts to rows and back.</summary>
internal static class RunRows
{
    public static void Write(StoreBatch batch, long run, double seconds, in FindingChange change)
    {
        var finding = change.Finding;
        // JSON has no NaN: a number that cannot be given is null.
        var evidence = finding.Evidence.ToDictionary(pair => pair.Key, pair => double.IsFinite(pair.Value) ? pair.Value : (double?)null);
        batch.Run(
            """
            INSERT INTO finding_changes (run, at_ms, kind, number, signature, severity, onset_seconds, raised_seconds, cleared_seconds, explanation, evidence)
            VALUES (?,?,?,?,?,?,?,?,?,?,?)
            """,
            run, StoreBatch.Milliseconds(seconds), change.Kind.ToString().ToLowerInvariant(), finding.Number, finding.Signature.Text(),
            finding.Severity.Text(), finding.OnsetSeconds, finding.RaisedSeconds, finding.ClearedSeconds, finding.Explanation,
            JsonSerializer.Serialize(evidence));
    }

    public static void Write(StoreBatch batch, long run, StoredAlertChange change) => batch.Run(
        "INSERT INTO alert_changes (run, at_ms, utc_ms, alert, transition, state, done_by, text, more) VALUES (?,?,?,?,?,?,?,?,?)",
        run, StoreBatch.Milliseconds(change.Seconds), change.Utc.ToUnixTimeMilliseconds(), change.Alert, change.Transition, change.State,
        change.By, change.Text, change.Json);

    public static void Write(StoreBatch batch, long run, StoredAnnouncement told) => batch.Run(
        "INSERT INTO announcements (run, at_ms, kind, detail, expectation) VALUES (?,?,?,?,?)",
        run, StoreBatch.Milliseconds(told.Seconds), told.Kind, told.Detail, told.ExpectationJson);

    public const string AnnouncementColumns = "at_ms, kind, detail, expectation";

    public static StoredAnnouncement ReadAnnouncement(SqliteDataReader row) =>
        new(row.GetInt64(0) / 1000.0, row.GetString(1), Text(row, 2), Text(row, 3));

    public const string FindingColumns =
        "at_ms, kind, number, signature, severity, onset_seconds, raised_seconds, cleared_seconds, explanation, evidence";

    public static StoredFindingChange ReadFinding(SqliteDataReader row)
    {
        var evidence = JsonSerializer.Deserialize<Dictionary<string, double?>>(row.GetString(9))!;
        var finding = new Finding(
            row.GetInt32(2),
            WatchingNames.ParseSignature(row.GetString(3)),
            Enum.Parse<Severity>(row.GetString(4), ignoreCase: true),
            Number(row, 5),
            Number(row, 6),
            row.IsDBNull(7) ? null : row.GetDouble(7),
            row.GetString(8),
            evidence.ToDictionary(pair => pair.Key, pair => pair.Value ?? double.NaN));
        return new StoredFindingChange(row.GetInt64(0) / 1000.0, new FindingChange(Enum.Parse<ChangeKind>(row.GetString(1), ignoreCase: true), finding));
    }

    public const string AlertColumns = "at_ms, utc_ms, alert, transition, state, done_by, text, more";

    public static StoredAlertChange ReadAlert(SqliteDataReader row) => new(
        row.GetInt64(0) / 1000.0, Utc(row.GetInt64(1)), row.GetString(2), row.GetString(3), row.GetString(4), Text(row, 5), Text(row, 6), Text(row, 7));

    public static DateTimeOffset Utc(long milliseconds) => DateTimeOffset.FromUnixTimeMilliseconds(milliseconds);

    public static double Number(SqliteDataReader row, int column) => row.IsDBNull(column) ? double.NaN : row.GetDouble(column);

    public static string? Text(SqliteDataReader row, int column) => row.IsDBNull(column) ? null : row.GetString(column);

    /// <summary>The id of a run begun at this instant, the n-th of its UTC day.</summary>
    public static string Id(DateTimeOffset utc, long number) =>
        string.Create(CultureInfo.InvariantCulture, $"{utc.UtcDateTime:yyyyMMdd}-{number:000}");
}
