using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording.Packing;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

public sealed partial class SoakStore
{
    private const string InfoColumns =
        """
        SELECT id, bench, unit, bank, mains, unit_label, planned_hours, started_ms, ended_ms,
            coalesce(length_ms, (SELECT max(to_ms) FROM chunks WHERE chunks.run=runs.run), 0),
            coalesce(readings, (SELECT sum(readings) FROM chunks WHERE chunks.run=runs.run), 0),
            lost, verdict, (SELECT count(DISTINCT number) FROM finding_changes f WHERE f.run=runs.run), resumed_from, software
        FROM runs
        """;

    /// <summary>The runs, latest first.</summary>
    public IReadOnlyList<RunInfo> Runs(RunFilter? filter = null)
    {
        filter ??= new RunFilter();
        return Read(reader => reader.List(
            InfoColumns +
            """
             WHERE ($bench IS NULL OR bench=$bench) AND ($verdict IS NULL OR verdict=$verdict)
                AND ($unit IS NULL OR instr(lower(unit), lower($unit)) OR instr(lower(coalesce(unit_label,'')), lower($unit)))
                AND ($from IS NULL OR started_ms>=$from) AND ($to IS NULL OR started_ms<$to)
            ORDER BY started_ms DESC, run DESC LIMIT $most
            """,
            ReadInfo,
            ("$bench", filter.Bench), ("$unit", filter.Unit), ("$verdict", filter.Verdict?.Text()),
            ("$from", filter.FromUtc?.ToUnixTimeMilliseconds()), ("$to", filter.ToUtc?.ToUnixTimeMilliseconds()), ("$most", filter.Most)));
    }

    /// <summary>One run with all but its readings.</summary>
    /// <exception cref="StoreException">There is no such run.</exception>
    public RunRecord Run(string run)
    {
        var key = KeyOf(run);
        return Read(reader => reader.List(
            InfoColumns.Replace("SELECT id", "SELECT configuration, prediction, reasons, summary, id", StringComparison.Ordinal) + " WHERE run=$run",
            row => new RunRecord(
                ReadInfo(row, 4),
                row.GetString(0),
                RunRows.Text(row, 1),
                RunRows.Text(row, 2) is { } reasons ? JsonSerializer.Deserialize<string[]>(reasons)! : [],
                RunRows.Text(row, 3),
                GapsOf(reader, key, long.MinValue, long.MaxValue),
                reader.List($"SELECT {RunRows.FindingColumns} FROM finding_changes WHERE run=$run ORDER BY change", RunRows.ReadFinding, ("$run", key)),
                reader.List($"SELECT {RunRows.AlertColumns} FROM alert_changes WHERE run=$run ORDER BY change", RunRows.ReadAlert, ("$run", key)),
                reader.List("SELECT utc_ms, author, text, at_ms FROM notes WHERE run=$run ORDER BY note", ReadNote, ("$run", key)),
                reader.List("SELECT name, media_type, utc_ms, bytes, sha256 FROM attachments WHERE run=$run ORDER BY attachment", ReadAttachment, ("$run", key)))
            {
                Announcements = reader.List($"SELECT {RunRows.AnnouncementColumns} FROM announcements WHERE run=$run ORDER BY announcement", RunRows.ReadAnnouncement, ("$run", key)),
            },
            ("$run", key))[0]);
    }

    /// <summary>A run's stream in order: readings, overloads and missed polls, each as it came.</summary>
    /// <exception cref="StoreException">There is no such run, or a part of it is damaged (the message says which seconds are lost).</exception>
    public IEnumerable<LineReading> Readings(string run, double fromSeconds = 0, double toSeconds = double.PositiveInfinity)
    {
        var from = (long)Math.Ceiling(fromSeconds * 1000);
        var to = double.IsPositiveInfinity(toSeconds) ? long.MaxValue : (long)Math.Floor(toSeconds * 1000);
        return Stretches(run, KeyOf(run), 0, from, to)
            .SelectMany(stretch => stretch.Readings.Where(reading => reading.Milliseconds >= from && reading.Milliseconds <= to));
    }

    /// <summary>
    /// A run's stream from an entry on, in stretches of its chunks. A few chunks are read at a time, so that a slow taker does
    /// not hold a view of the file open; between two such reads the writer may pack short chunks into one that reaches back
    /// before the entry wanted, whose first entries are then left out.
    /// </summary>
    internal IEnumerable<(long First, ArraySegment<LineReading> Readings)> Stretches(
        string run, long key, long fromEntry, long fromMs = long.MinValue, long toMs = long.MaxValue)
    {
        const int atATime = 64;
        while (true)
        {
            var some = Read(reader => reader.Chunks(key, fromMs, toMs, fromEntry).Take(atATime).ToList());
            foreach (var (first, data) in some)
            {
                var readings = Unpack(run, first, data);
                var skip = (int)Math.Clamp(fromEntry - first, 0, readings.Length);
                yield return (first + skip, new ArraySegment<LineReading>(readings, skip, readings.Length - skip));
                fromEntry = first + readings.Length;
            }

            if (some.Count < atATime)
            {
                yield break;
            }
        }
    }

    /// <summary>Whether the run has mains readings.</summary>
    public bool HasVolts(string run) => Readings(run).Any(reading => !double.IsNaN(reading.MainsVolts));

    /// <summary>The bytes of an attachment.</summary>
    /// <exception cref="StoreException">There is no such run or attachment.</exception>
    public byte[] Attachment(string run, string name) => Read(reader => reader.List(
        "SELECT data FROM attachments WHERE run=$run AND name=$name ORDER BY attachment DESC LIMIT 1",
        row => row.GetFieldValue<byte[]>(0),
        ("$run", KeyOf(run)), ("$name", name)).FirstOrDefault())
        ?? throw new StoreException($"Run {run} has no attachment named '{name}'.");

    internal static IReadOnlyList<StoredGap> GapsOf(StoreReader reader, long run, long fromMs, long toMs) => reader.List(
        "SELECT from_ms, to_ms, reason, detail, polls FROM gaps WHERE run=$run AND to_ms>=$from AND from_ms<=$to ORDER BY from_ms, gap",
        row => new StoredGap(row.GetInt64(0) / 1000.0, row.GetInt64(1) / 1000.0, row.GetString(2), RunRows.Text(row, 3), row.GetInt64(4)),
        ("$run", run), ("$from", fromMs), ("$to", toMs));

    internal LineReading[] Unpack(string run, long first, byte[] data)
    {
        try
        {
            return ReadingChunk.Unpack(data);
        }
        catch (InvalidDataException damage)
        {
            throw new StoreException(
                $"Readings of run {run} from entry {first} on are damaged in {FilePath}: {damage.Message}. The other runs are not concerned.", damage);
        }
    }

    internal long KeyOf(string run) => Read(reader => KeyOf(reader, run));

    private long KeyOf(StoreReader reader, string run) => reader.List<long?>(
        "SELECT run FROM runs WHERE id=$id", row => row.GetInt64(0), ("$id", run)).FirstOrDefault()
        ?? throw new StoreException($"There is no run '{run}' in {FilePath}. 'lampwarden runs' lists those there are.");

    internal T Read<T>(Func<StoreReader, T> ask)
    {
        try
        {
            using var reader = new StoreReader(_file);
            return ask(reader);
        }
        catch (SqliteException trouble)
        {
            throw StoreException.From(trouble, "Reading", FilePath);
        }
        catch (InvalidDataException damage)
        {
            throw new StoreException($"{FilePath} is damaged: {damage.Message}. The readings themselves may be whole: try 'lampwarden export'.", damage);
        }
    }

    private static RunInfo ReadInfo(SqliteDataReader row) => ReadInfo(row, 0);

    private static RunInfo ReadInfo(SqliteDataReader row, int at) => new(
        row.GetString(at), row.GetString(at + 1), row.GetString(at + 2), row.GetString(at + 3), row.GetString(at + 4),
        RunRows.Text(row, at + 5), RunRows.Number(row, at + 6), RunRows.Utc(row.GetInt64(at + 7)),
        row.IsDBNull(at + 8) ? null : RunRows.Utc(row.GetInt64(at + 8)), row.GetInt64(at + 9) / 1000.0, row.GetInt64(at + 10), row.GetInt64(at + 11),
        RunRows.Text(row, at + 12) is { } verdict ? Enum.Parse<Verdict>(verdict, ignoreCase: true) : null,
        row.GetInt32(at + 13), RunRows.Text(row, at + 14), row.GetString(at + 15));

    private static Note ReadNote(SqliteDataReader row) => new(
        RunRows.Utc(row.GetInt64(0)), RunRows.Text(row, 1), row.GetString(2), row.IsDBNull(3) ? null : row.GetInt64(3) / 1000.0);

    private static AttachmentInfo ReadAttachment(SqliteDataReader row) => new(
        row.GetString(0), row.GetString(1), RunRows.Utc(row.GetInt64(2)), row.GetInt64(3), row.GetString(4));
}
