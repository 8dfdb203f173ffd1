using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>
/// The tables, as a list of steps: step n brings a file of version n-1 to version n, and a new file takes all of them.
/// Steps are never edited once released. docs/record.md describes the columns: keep it in step.
/// </summary>
internal static class StoreSchema
{
    /// <summary>Marks the file as ours (PRAGMA application_id): "LWsk".</summary>
    public const int ApplicationId = 0x4C57736B;

    public static int Version => Steps.Length;

    private static readonly string[] Steps =
    [
        """
        CREATE TABLE meta (key TEXT PRIMARY KEY, value TEXT) WITHOUT ROWID;
        CREATE TABLE runs (
            run INTEGER PRIMARY KEY, id TEXT NOT NULL UNIQUE, bench TEXT NOT NULL, unit TEXT NOT NULL, unit_label TEXT,
            bank TEXT NOT NULL, mains TEXT NOT NULL, planned_hours REAL, configuration TEXT NOT NULL, prediction TEXT,
            software TEXT NOT NULL, started_ms INTEGER NOT NULL, ended_ms INTEGER, resumed_from TEXT,
            length_ms INTEGER, readings INTEGER,
            lost INTEGER NOT NULL DEFAULT 0, verdict TEXT, reasons TEXT, summary TEXT);
        CREATE TABLE watch_states (run INTEGER PRIMARY KEY, at_ms INTEGER NOT NULL, data BLOB NOT NULL);
        CREATE TABLE chunks (
            run INTEGER NOT NULL, first INTEGER NOT NULL, count INTEGER NOT NULL, readings INTEGER NOT NULL,
            from_ms INTEGER NOT NULL, to_ms INTEGER NOT NULL, data BLOB NOT NULL, PRIMARY KEY (run, first));
        CREATE TABLE rollups (
            run INTEGER NOT NULL, first INTEGER NOT NULL, count INTEGER NOT NULL, from_ms INTEGER NOT NULL,
            to_ms INTEGER NOT NULL, slots BLOB NOT NULL, PRIMARY KEY (run, first));
        CREATE TABLE gaps (
            gap INTEGER PRIMARY KEY, run INTEGER NOT NULL, from_ms INTEGER NOT NULL, to_ms INTEGER NOT NULL,
            reason TEXT NOT NULL, detail TEXT, polls INTEGER NOT NULL);
        CREATE INDEX gaps_of_run ON gaps (run, from_ms);
        CREATE TABLE finding_changes (
            change INTEGER PRIMARY KEY, run INTEGER NOT NULL, at_ms INTEGER NOT NULL, kind TEXT NOT NULL, number INTEGER NOT NULL,
            signature TEXT NOT NULL, severity TEXT NOT NULL, onset_seconds REAL, raised_seconds REAL, cleared_seconds REAL,
            explanation TEXT NOT NULL, evidence TEXT NOT NULL);
        CREATE INDEX finding_changes_of_run ON finding_changes (run, change);
        CREATE TABLE alert_changes (
            change INTEGER PRIMARY KEY, run INTEGER NOT NULL, at_ms INTEGER NOT NULL, utc_ms INTEGER NOT NULL, alert TEXT NOT NULL,
            transition TEXT NOT NULL, state TEXT NOT NULL, done_by TEXT, text TEXT, more TEXT);
        CREATE INDEX alert_changes_of_run ON alert_changes (run, change);
        CREATE TABLE notes (
            note INTEGER PRIMARY KEY, run INTEGER NOT NULL, utc_ms INTEGER NOT NULL, at_ms INTEGER, author TEXT, text TEXT NOT NULL);
        CREATE INDEX notes_of_run ON notes (run, note);
        CREATE TABLE attachments (
            attachment INTEGER PRIMARY KEY, run INTEGER NOT NULL, utc_ms INTEGER NOT NULL, name TEXT NOT NULL,
            media_type TEXT NOT NULL, bytes INTEGER NOT NULL, sha256 TEXT NOT NULL, data BLOB NOT NULL);
        CREATE INDEX attachments_of_run ON attachments (run, attachment);
        """,
        """
        ALTER TABLE runs ADD COLUMN origin TEXT;
        ALTER TABLE runs ADD COLUMN signed_by TEXT;
        ALTER TABLE runs ADD COLUMN signed_ms INTEGER;
        CREATE TABLE reference_units (model TEXT PRIMARY KEY, run INTEGER NOT NULL, utc_ms INTEGER NOT NULL);
        CREATE TABLE forwarding (
            target TEXT NOT NULL, run INTEGER NOT NULL, entries INTEGER NOT NULL DEFAULT 0, findings INTEGER NOT NULL DEFAULT 0,
            alerts INTEGER NOT NULL DEFAULT 0, begun INTEGER NOT NULL DEFAULT 0, ended INTEGER NOT NULL DEFAULT 0, PRIMARY KEY (target, run));
        CREATE TABLE parked_points (
            point INTEGER PRIMARY KEY, target TEXT NOT NULL, run INTEGER NOT NULL, utc_ms INTEGER NOT NULL, reason TEXT NOT NULL, line TEXT NOT NULL);
        """,
        // All that a search in time needs, in a page or two: the chunks themselves are spread over the file.
        """
        CREATE INDEX chunks_in_time ON chunks (run, first, count, from_ms, to_ms);
        """,
        // A soak that is carried on weighs its stored readings again, which needs no state of the watch's kept.
        """
        DROP TABLE watch_states;
        """,
        // What a person told the watch, in a form it can be told again: notes are for people.
        """
        CREATE TABLE announcements (
            announcement INTEGER PRIMARY KEY, run INTEGER NOT NULL, at_ms INTEGER NOT NULL, kind TEXT NOT NULL, detail TEXT, expectation TEXT);
        CREATE INDEX announcements_of_run ON announcements (run, announcement);
        """,
    ];

    /// <summary>For a file that cannot be written, and so not be brought to this version.</summary>
    /// <exception cref="StoreException">It is of another version.</exception>
    public static void RefuseOtherVersions(SqliteConnection connection, string path)
    {
        if (Scalar(connection, "PRAGMA user_version") is var found && found != Version)
        {
            throw new StoreException(
                $"{path} has schema version {found} and cannot be written, so it cannot be brought to version {Version}. Copy the folder to a medium that can be written.");
        }
    }

    /// <summary>Brings the file to this program's version, each step in a transaction of its own.</summary>
    /// <exception cref="StoreException">The file is of a later version, or of another program.</exception>
    public static void Migrate(SqliteConnection connection, string path)
    {
        var found = (int)Scalar(connection, "PRAGMA user_version");
        if (found == Version && Scalar(connection, "PRAGMA application_id") == ApplicationId)
        {
            return;
        }

        var application = (int)Scalar(connection, "PRAGMA application_id");
        var isNew = found == 0 && Scalar(connection, "SELECT count(*) FROM sqlite_master") == 0;
        if (!isNew && application != ApplicationId)
        {
            throw new StoreException($"{path} is an SQLite file of another program. Move it aside, or give another folder with --record.");
        }

        if (found > Version)
        {
            throw new StoreException(
                $"{path} has schema version {found}, and this program knows versions up to {Version}. Use the program that wrote it, or a later one.");
        }

        for (var step = found; step < Version; step++)
        {
            using var transaction = connection.BeginTransaction();
            Execute(connection, Steps[step]);
            Execute(connection, $"PRAGMA application_id={ApplicationId}; PRAGMA user_version={step + 1}");
            transaction.Commit();
        }
    }

    internal static long Scalar(SqliteConnection connection, string sql)
    {
        using var command = connection.CreateCommand();
        command.CommandText = sql;
        return Convert.ToInt64(command.ExecuteScalar(), System.Globalization.CultureInfo.InvariantCulture);
    }

    internal static void Execute(SqliteConnection connection, string sql)
    {
        using var command = connection.CreateCommand();
        command.CommandText = sql;
        command.ExecuteNonQuery();
    }
}
