using Lampwarden.Host.Recording.Packing;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording.Writing;

/// <summary>The writer's connection within one transaction. Statements are prepared once and kept.</summary>
internal sealed class StoreBatch(SqliteConnection connection, int chunkReadings) : IDisposable
{
    private readonly Dictionary<string, SqliteCommand> _prepared = [];

    /// <summary>The transaction at hand; set by the writer.</summary>
    public SqliteTransaction? Transaction { get; set; }

    /// <summary>Runs with readings, losses or an end in this transaction.</summary>
    public HashSet<ActiveRun> Touched { get; } = [];

    public int Run(string sql, params ReadOnlySpan<object?> values)
    {
        var command = Prepare(sql, values);
        return command.ExecuteNonQuery();
    }

    public object? Ask(string sql, params ReadOnlySpan<object?> values) => Prepare(sql, values).ExecuteScalar();

    public List<T> Rows<T>(string sql, Func<SqliteDataReader, T> read, params ReadOnlySpan<object?> values)
    {
        using var rows = Prepare(sql, values).ExecuteReader();
        var list = new List<T>();
        while (rows.Read())
        {
            list.Add(read(rows));
        }

        return list;
    }

    public void Add(ActiveRun run, in LineReading reading)
    {
        run.Fresh.Add(reading);
        Touched.Add(run);
        if (run.FreshGap is { } ended)
        {
            Run("UPDATE gaps SET to_ms=? WHERE gap=?", reading.Milliseconds, ended.Row);
            run.FreshGap = null;
        }
    }

    public void AddMissed(ActiveRun run, in LineReading missed, string reason, string? detail)
    {
        var from = run.FreshGap?.ToMs ?? (run.Fresh.Count > 0 ? run.Fresh[^1].Milliseconds : run.LastMs);
        run.Fresh.Add(missed);
        Touched.Add(run);
        if (run.FreshGap is { } open && open.Reason == reason)
        {
            Run("UPDATE gaps SET to_ms=?, polls=polls+1 WHERE gap=?", missed.Milliseconds, open.Row);
            run.FreshGap = open with { ToMs = missed.Milliseconds };
            return;
        }

        Run(
            "INSERT INTO gaps (run, from_ms, to_ms, reason, detail, polls) VALUES (?,?,?,?,?,1)",
            run.Key, from, missed.Milliseconds, reason, detail);
        run.FreshGap = new OpenGap((long)Ask("SELECT last_insert_rowid()")!, reason, missed.Milliseconds);
    }

    /// <summary>Writes the fresh entries of a run: as a short chunk, or with all that wait in short ones as full chunks.</summary>
    public void WriteFresh(ActiveRun run)
    {
        if (run.Tail.Count + run.Fresh.Count < chunkReadings && run.End is null)
        {
            WriteChunk(run, run.Entries, [.. run.Fresh], full: false);
            return;
        }

        LineReading[] all = [.. run.Tail, .. run.Fresh];
        var first = run.Entries - run.Tail.Count;
        Run("DELETE FROM chunks WHERE run=? AND first>=?", run.Key, first);
        var written = 0;
        while (all.Length - written >= chunkReadings || (run.End is not null && written < all.Length))
        {
            var count = Math.Min(chunkReadings, all.Length - written);
            WriteChunk(run, first + written, all.AsSpan(written, count), full: true);
            written += count;
        }

        WriteChunk(run, first + written, all.AsSpan(written), full: false);
    }

    public void Dispose()
    {
        foreach (var command in _prepared.Values)
        {
            command.Dispose();
        }
    }

    internal static long Milliseconds(double seconds) => (long)Math.Round(seconds * 1000);

    private void WriteChunk(ActiveRun run, long first, ReadOnlySpan<LineReading> readings, bool full)
    {
        if (readings.IsEmpty)
        {
            return;
        }

        var taken = 0;
        foreach (ref readonly var reading in readings)
        {
            taken += reading.IsMissing ? 0 : 1;
        }

        var (from, to) = (readings[0].Milliseconds, readings[^1].Milliseconds);
        Run(
            "INSERT INTO chunks (run, first, count, readings, from_ms, to_ms, data) VALUES (?,?,?,?,?,?,?)",
            run.Key, first, readings.Length, taken, from, to, ReadingChunk.Pack(readings));
        if (full)
        {
            Run(
                "INSERT INTO rollups (run, first, count, from_ms, to_ms, slots) VALUES (?,?,?,?,?,?)",
                run.Key, first, readings.Length, from, to, SlotChunk.Pack(Slot.Of(readings)));
        }
    }

    private SqliteCommand Prepare(string sql, ReadOnlySpan<object?> values)
    {
        if (!_prepared.TryGetValue(sql, out var command))
        {
            command = connection.CreateCommand();
            var parts = sql.Split('?');
            command.CommandText = string.Concat(parts.Select((part, index) => index == 0 ? part : $"$p{index}{part}"));
            for (var index = 1; index < parts.Length; index++)
            {
                command.Parameters.Add(new SqliteParameter { ParameterName = $"$p{index}" });
            }

            _prepared[sql] = command;
        }

        command.Transaction = Transaction;
        for (var i = 0; i < values.Length; i++)
        {
            command.Parameters[i].Value = values[i] is null or double.NaN ? DBNull.Value : values[i];
        }

        return command;
    }
}
