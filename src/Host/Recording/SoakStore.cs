using Lampwarden.Host.Recording.Writing;
using Microsoft.Data.Sqlite;

namespace Lampwarden.Host.Recording;

/// <summary>
/// All runs of a folder in one SQLite file (WAL, synchronous FULL). One background thread writes; whoever records never waits
/// for the disk. Safe for several threads. What survives a kill, a power cut and a full disk: docs/record.md.
/// </summary>
public sealed partial class SoakStore : IDisposable
{
    /// <summary>Name of the file within the folder.</summary>
    public const string FileName = "soaks.db";

    private const long AlwaysCheckedBytes = 64 << 20;

    private readonly TimeProvider _time;
    private readonly FolderLock? _lock;
    private readonly SqliteConnection _connection;
    private readonly StoreWriter _writer;

    private SoakStore(string path, TimeProvider time, FolderLock? folderLock, SqliteConnection connection, StoreOptions options)
    {
        (FilePath, _time, _lock, _connection) = (path, time, folderLock, connection);
        _writer = new StoreWriter(connection, path, options);
    }

    /// <summary>The store's file.</summary>
    public string FilePath { get; }

    /// <summary>Runs that had been interrupted and were closed as incomplete by this opening; say so to the user.</summary>
    public IReadOnlyList<RunInfo> Interrupted { get; private set; } = [];

    /// <summary>How recording goes.</summary>
    public StoreHealth Health
    {
        get
        {
            var (accepted, stored, waiting, refused) = _writer.Queue.Counts;
            var ticks = _writer.LastCommitUtcTicks;
            return new StoreHealth(accepted, stored, waiting, refused, _writer.Trouble, ticks == 0 ? null : new DateTimeOffset(ticks, TimeSpan.Zero));
        }
    }

    /// <summary>Opens the store of a folder, making both where they are missing, and brings an older file to this version.</summary>
    /// <param name="folder">Where the store lies.</param>
    /// <param name="time">Gives the times of runs and notes; commits keep real time whatever it says.</param>
    /// <exception cref="StoreException">Not writable, damaged, of a later version, or in use; the message says what to do.</exception>
    public static SoakStore Open(string folder, TimeProvider time, StoreMode mode = StoreMode.Recording, StoreOptions? options = null)
    {
        var path = Path.GetFullPath(Path.Combine(folder, FileName));
        var folderLock = mode == StoreMode.Recording ? FolderLock.Take(Path.GetFullPath(folder)) : null;
        SqliteConnection? connection = null;
        try
        {
            Directory.CreateDirectory(Path.GetDirectoryName(path)!);
            connection = Connect(path, SqliteOpenMode.ReadWriteCreate);
            // auto_vacuum takes effect only before the first table: free pages go back to the disk when a run is closed.
            StoreSchema.Execute(connection, "PRAGMA auto_vacuum=INCREMENTAL; PRAGMA journal_mode=WAL; PRAGMA synchronous=FULL");
            StoreSchema.Migrate(connection, path);
            if (mode == StoreMode.Recording)
            {
                Check(connection, path);
            }

            var store = new SoakStore(path, time, folderLock, connection, options ?? new StoreOptions());
            if (mode == StoreMode.Recording)
            {
                store.CloseInterrupted();
            }

            return store;
        }
        catch (Exception trouble)
        {
            connection?.Dispose();
            folderLock?.Dispose();
            throw trouble switch
            {
                SqliteException sqlite => StoreException.From(sqlite, "Opening", path),
                IOException or UnauthorizedAccessException => new StoreException($"Opening {path} failed: {trouble.Message}", trouble),
                _ => trouble,
            };
        }
    }

    /// <summary>Begins a run; on return its row is on disk.</summary>
    /// <exception cref="StoreException">It cannot be stored; nothing has begun.</exception>
    public async Task<RunRecorder> BeginRunAsync(RunStart start, CancellationToken cancellationToken = default)
    {
        var run = new ActiveRun();
        var started = start.StartedUtc ?? _time.GetUtcNow();
        await DoAsync(batch => RunBeginning.Write(batch, run, start, started), cancellationToken);
        return new RunRecorder(_writer, run);
    }

    /// <summary>Keeps a note with a run, whether it goes on or has ended.</summary>
    /// <exception cref="StoreException">There is no such run, or the note cannot be stored.</exception>
    public Task AddNoteAsync(string run, string text, string? author = null, double? atSeconds = null, CancellationToken cancellationToken = default)
    {
        var (key, utc) = (KeyOf(run), _time.GetUtcNow().ToUnixTimeMilliseconds());
        return DoAsync(
            batch => batch.Run(
                "INSERT INTO notes (run, utc_ms, at_ms, author, text) VALUES (?,?,?,?,?)",
                key, utc, atSeconds is { } at ? StoreBatch.Milliseconds(at) : null, author, text),
            cancellationToken);
    }

    /// <summary>Keeps a file (a photograph, a measurement sheet) with a run.</summary>
    /// <exception cref="StoreException">There is no such run, the file is above 100 MB, or it cannot be stored.</exception>
    public Task AttachAsync(string run, string name, string mediaType, byte[] data, CancellationToken cancellationToken = default)
    {
        const int largest = 100_000_000;
        if (data.Length > largest)
        {
            throw new StoreException($"{name} has {data.Length} bytes; at most {largest} can be kept with a run. Keep it elsewhere and note where.");
        }

        var (key, utc) = (KeyOf(run), _time.GetUtcNow().ToUnixTimeMilliseconds());
        var sha256 = Convert.ToHexStringLower(System.Security.Cryptography.SHA256.HashData(data));
        return DoAsync(
            batch => batch.Run(
                "INSERT INTO attachments (run, utc_ms, name, media_type, bytes, sha256, data) VALUES (?,?,?,?,?,?,?)",
                key, utc, name, mediaType, (long)data.Length, sha256, data),
            cancellationToken);
    }

    /// <summary>Stores what waits and closes the file. A run not ended by then counts as interrupted at the next opening.</summary>
    public void Dispose()
    {
        _writer.Dispose();
        if (_lock is not null && _writer.Trouble is null)
        {
            try
            {
                StoreSchema.Execute(_connection, "INSERT OR REPLACE INTO meta VALUES ('closed', 'clean')");
            }
            catch (SqliteException)
            {
                // The next opening checks the whole file: that is all this mark would have spared it.
            }
        }

        _connection.Dispose();
        _lock?.Dispose();
    }

    internal static SqliteConnection Connect(string path, SqliteOpenMode mode)
    {
        var connection = new SqliteConnection(new SqliteConnectionStringBuilder
        {
            DataSource = path,
            Mode = mode,
            Pooling = false,
            DefaultTimeout = 5,
        }.ToString());
        connection.Open();
        return connection;
    }

    // A large file that was closed properly is not read through at every start; every chunk carries a check sum of its own anyway.
    private static void Check(SqliteConnection connection, string path)
    {
        using var command = connection.CreateCommand();
        command.CommandText = "SELECT count(*) FROM meta WHERE key='closed' AND value='clean'";
        var clean = (long)command.ExecuteScalar()! == 1;
        if (!clean || new FileInfo(path).Length < AlwaysCheckedBytes)
        {
            command.CommandText = "PRAGMA quick_check(1)";
            if (command.ExecuteScalar() as string is var found && found != "ok")
            {
                throw new StoreException(
                    $"{path} is damaged ({found}). Nothing was changed. Keep a copy, read what is whole with 'lampwarden runs' and "
                    + "'lampwarden export', and record into a new folder with --record.");
            }
        }

        StoreSchema.Execute(connection, "DELETE FROM meta WHERE key='closed'");
    }

    private async Task DoAsync(Action<StoreBatch> apply, CancellationToken cancellationToken)
    {
        var action = new StoreAction(apply) { Hurry = true, GiveUpOnTrouble = true };
        if (!_writer.Queue.TryAdd(new WriteItem(null, default, action)))
        {
            throw new StoreException($"Writing into {FilePath} failed: {_writer.Trouble ?? "the store is being closed"}");
        }

        if (await action.Done.WaitAsync(cancellationToken) is { } trouble)
        {
            throw trouble;
        }
    }
}
