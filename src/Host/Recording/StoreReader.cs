using Lampwarden.Host.Recording.Packing;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>A connection for one question. Reads what is committed, without holding up the writer.</summary>
internal sealed class StoreReader : IDisposable
{
    private readonly SqliteConnection _connection;

    private readonly SqliteTransaction _view;

    public StoreReader(StoreFile file)
    {
        _connection = file.Connect(SqliteOpenMode.ReadOnly);
        // One view for all statements of a question: the writer may be packing short chunks into a full one meanwhile.
        _view = _connection.BeginTransaction(deferred: true);
    }

    public void Dispose()
    {
        _view.Dispose();
        _connection.Dispose();
    }

    public long Count(long run, string sql)
    {
        using var command = Command(sql, ("$run", run));
        return (long)command.ExecuteScalar()!;
    }

    public List<T> List<T>(string sql, Func<SqliteDataReader, T> read, params (string Name, object? Value)[] values)
    {
        using var command = Command(sql, values);
        using var rows = command.ExecuteReader();
        var list = new List<T>();
        while (rows.Read())
        {
            list.Add(read(rows));
        }

        return list;
    }

    /// <summary>The chunks that overlap a time, in order, with their bytes still packed.</summary>
    public IEnumerable<(long First, byte[] Data)> Chunks(long run, long fromMs, long toMs, long fromEntry = 0)
    {
        using var command = Command(
            """
            SELECT first, data FROM chunks WHERE rowid IN (
                SELECT rowid FROM chunks INDEXED BY chunks_in_time WHERE run=$run AND first+count>$first AND to_ms>=$from AND from_ms<=$to)
            ORDER BY first
            """,
            ("$run", run), ("$first", fromEntry), ("$from", fromMs), ("$to", toMs));
        using var rows = command.ExecuteReader();
        while (rows.Read())
        {
            yield return (rows.GetInt64(0), rows.GetFieldValue<byte[]>(1));
        }
    }

    /// <summary>The chunks that wait to be packed into a full one: those after the last roll-up.</summary>
    public IEnumerable<(long First, byte[] Data)> ShortChunks(long run) => Chunks(run, long.MinValue, long.MaxValue, FirstShort(run));

    public long FirstShort(long run) => Count(run, "SELECT coalesce(max(first+count),0) FROM rollups WHERE run=$run");

    public IEnumerable<Slot[]> Slots(long run, long fromMs, long toMs)
    {
        using var command = Command(
            "SELECT slots FROM rollups WHERE run=$run AND to_ms>=$from AND from_ms<=$to ORDER BY first", ("$run", run), ("$from", fromMs), ("$to", toMs));
        using var rows = command.ExecuteReader();
        while (rows.Read())
        {
            yield return SlotChunk.Unpack(rows.GetFieldValue<byte[]>(0));
        }
    }

    public SqliteCommand Command(string sql, params (string Name, object? Value)[] values)
    {
        var command = _connection.CreateCommand();
        command.CommandText = sql;
        foreach (var (name, value) in values)
        {
            command.Parameters.AddWithValue(name, value ?? DBNull.Value);
        }

        return command;
    }
}
