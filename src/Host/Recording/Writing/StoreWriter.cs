using System.Diagnostics;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording.Writing;

/// <summary>
/// The one thread that writes: every <see cref="StoreOptions.CommitEvery"/> of real time, or at once when somebody waits,
/// it puts the oldest entries into one transaction. They leave the queue only after the commit, so a failed commit loses nothing.
/// </summary>
internal sealed class StoreWriter : IDisposable
{
    private const int MostPerCommit = 16_384;

    // A failing disk is not hammered when alerts keep asking for a commit.
    private static readonly TimeSpan LeastBetweenTries = TimeSpan.FromMilliseconds(50);

    private readonly SqliteConnection _connection;
    private readonly StoreBatch _batch;
    private readonly StoreOptions _options;
    private readonly string _path;
    private readonly Thread _thread;
    private readonly WriteItem[] _items = new WriteItem[MostPerCommit];

    public StoreWriter(SqliteConnection connection, string path, StoreOptions options)
    {
        (_connection, _path, _options) = (connection, path, options);
        StoreSchema.Execute(connection, "PRAGMA synchronous=FULL");
        _batch = new StoreBatch(connection, options.ChunkReadings);
        Queue = new WriteQueue(options.QueueCapacity, options.QueueReserve);
        _thread = new Thread(Loop) { IsBackground = true, Name = "soak store writer" };
        _thread.Start();
    }

    public WriteQueue Queue { get; }

    /// <summary>Why nothing can be stored at present. Written by the writer's thread only.</summary>
    public volatile string? Trouble;

    /// <summary>Ticks of the last commit's UTC; 0 before it.</summary>
    public long LastCommitUtcTicks => Interlocked.Read(ref _lastCommitUtcTicks);

    private long _lastCommitUtcTicks;

    public void Dispose()
    {
        Queue.Close();
        _thread.Join();
        _batch.Dispose();
        _connection.Dispose();
    }

    private void Loop()
    {
        var sinceCommit = Stopwatch.StartNew();
        while (Queue.Wait(_options.CommitEvery - sinceCommit.Elapsed))
        {
            sinceCommit.Restart();
            try
            {
                Commit();
            }
            catch (SqliteException trouble)
            {
                GiveWay(StoreException.From(trouble, "Writing into", _path));
            }
            catch (Exception trouble) when (trouble is not OutOfMemoryException)
            {
                // The driver's InvalidOperationException when a failed statement has already ended the transaction, or a slip of
                // ours. A dead writer would take the watch down with it; a trouble that is told raises an alert and keeps it alive.
                GiveWay(new StoreException($"Writing into {_path} failed: {trouble.Message}", trouble));
            }
        }
    }

    private void GiveWay(StoreException trouble)
    {
        Trouble = trouble.Message;
        Queue.GiveUp(trouble, everything: Queue.IsClosed);
        Thread.Sleep(LeastBetweenTries);
    }

    private void Commit()
    {
        var count = Queue.Peek(_items);
        if (count == 0)
        {
            return;
        }

        var losses = new List<(ActiveRun Run, Loss Loss)>();
        var lost = 0;
        using (var transaction = _connection.BeginTransaction())
        {
            try
            {
                _batch.Transaction = transaction;
                lost = Apply(_items.AsSpan(0, count));
                foreach (var run in _batch.Touched)
                {
                    losses.Add((run, WriteLoss(run)));
                    _batch.WriteFresh(run);
                    WriteEnd(run);
                }

                transaction.Commit();
            }
            catch
            {
                Forget();
                throw;
            }
        }

        Keep(losses);
        Queue.Drop(count, lost, moreAtOnce: count == MostPerCommit);
        Trouble = null;
        Interlocked.Exchange(ref _lastCommitUtcTicks, TimeProvider.System.GetUtcNow().Ticks);
        foreach (ref readonly var item in _items.AsSpan(0, count))
        {
            item.Action?.Finish(null);
        }

        _items.AsSpan(0, count).Clear();
    }

    private int Apply(ReadOnlySpan<WriteItem> items)
    {
        var lost = 0;
        foreach (ref readonly var item in items)
        {
            if (item.Action is null)
            {
                _batch.Add(item.Run!, item.Reading);
                continue;
            }

            try
            {
                item.Action.Apply?.Invoke(_batch);
            }
            catch (Exception trouble) when (trouble is not OutOfMemoryException && !(trouble is SqliteException medium && StoreException.IsOfTheMedium(medium)))
            {
                // The entry alone has failed (a broken rule, a thing too big): it would fail for ever and hold up the rest.
                item.Action.Finish(new StoreException($"Writing into {_path} failed: {trouble.Message}", trouble));
                lost++;
            }
        }

        return lost;
    }

    private Loss WriteLoss(ActiveRun run)
    {
        var loss = run.Loss;
        if (loss.Count > 0)
        {
            _batch.Run(
                "INSERT INTO gaps (run, from_ms, to_ms, reason, detail, polls) VALUES (?,?,?,?,?,?)",
                run.Key, StoreBatch.Milliseconds(loss.FromSeconds), StoreBatch.Milliseconds(loss.ToSeconds), "not-stored",
                "the store could not keep up or could not write", loss.Count);
            _batch.Run("UPDATE runs SET lost=lost+? WHERE run=?", loss.Count, run.Key);
        }

        return loss;
    }

    private void WriteEnd(ActiveRun run)
    {
        if (run.End is { } end)
        {
            RunEnding.Write(_batch, run.Key, end);
        }
    }

    private void Keep(List<(ActiveRun Run, Loss Loss)> losses)
    {
        var ended = false;
        foreach (var (run, loss) in losses)
        {
            run.LossStored(loss);
            run.Entries += run.Fresh.Count;
            run.Tail.AddRange(run.Fresh);
            run.LastMs = run.Fresh.Count > 0 ? run.Fresh[^1].Milliseconds : run.LastMs;
            if (run.Tail.Count >= _options.ChunkReadings)
            {
                run.Tail.RemoveRange(0, run.Tail.Count / _options.ChunkReadings * _options.ChunkReadings);
            }

            if (run.End is not null)
            {
                run.Tail.Clear();
                ended = true;
            }

            run.Gap = run.FreshGap;
        }

        Forget();
        if (ended)
        {
            // Short chunks have left free pages behind: give them back, so that a closed run takes what it needs and no more.
            StoreSchema.Execute(_connection, "PRAGMA incremental_vacuum; PRAGMA wal_checkpoint(TRUNCATE)");
        }
    }

    private void Forget()
    {
        foreach (var run in _batch.Touched)
        {
            run.Fresh.Clear();
            run.FreshGap = run.Gap;
            run.End = null;
        }

        _batch.Touched.Clear();
    }
}
