using Lampwarden.Host.Recording;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Benchmarks.Recording;

/// <summary>What the packed store is held against: one row a reading, in the same file format, with the same commits.</summary>
internal sealed class PlainTable : IDisposable
{
    private readonly SqliteConnection _connection;
    private readonly SqliteCommand _insert;

    public PlainTable(string path)
    {
        _connection = new SqliteConnection($"Data Source={path};Pooling=False");
        _connection.Open();
        Execute("PRAGMA journal_mode=WAL; PRAGMA synchronous=FULL; CREATE TABLE IF NOT EXISTS readings (run INTEGER, ms INTEGER, amps REAL, PRIMARY KEY (run, ms)) WITHOUT ROWID");
        _insert = _connection.CreateCommand();
        _insert.CommandText = "INSERT OR REPLACE INTO readings VALUES (1, $ms, $amps)";
        _insert.Parameters.Add("$ms", SqliteType.Integer);
        _insert.Parameters.Add("$amps", SqliteType.Real);
    }

    public void Append(IEnumerable<LineReading> readings, int perCommit)
    {
        foreach (var some in readings.Chunk(perCommit))
        {
            using var transaction = _connection.BeginTransaction();
            _insert.Transaction = transaction;
            foreach (var reading in some)
            {
                _insert.Parameters[0].Value = reading.Milliseconds;
                _insert.Parameters[1].Value = reading.Amps;
                _insert.ExecuteNonQuery();
            }

            transaction.Commit();
        }
    }

    public int Window(double fromSeconds, double toSeconds, int buckets)
    {
        using var command = _connection.CreateCommand();
        command.CommandText = "SELECT (ms-$from)*$n/($to-$from), min(amps), max(amps), avg(amps), count(*) FROM readings WHERE run=1 AND ms>=$from AND ms<$to GROUP BY 1";
        command.Parameters.AddWithValue("$from", (long)(fromSeconds * 1000));
        command.Parameters.AddWithValue("$to", (long)(toSeconds * 1000));
        command.Parameters.AddWithValue("$n", buckets);
        using var rows = command.ExecuteReader();
        var count = 0;
        while (rows.Read())
        {
            count++;
        }

        return count;
    }

    public void Dispose()
    {
        Execute("PRAGMA wal_checkpoint(TRUNCATE)");
        _insert.Dispose();
        _connection.Dispose();
    }

    private void Execute(string sql)
    {
        using var command = _connection.CreateCommand();
        command.CommandText = sql;
        command.ExecuteNonQuery();
    }
}
