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

    private readonly TimeProvider _time;
    private readonly StoreFile _file;
    private readonly FolderLock? _lock;
    private readonly Lazy<StoreWriter> _writer;

    private SoakStore(StoreFile file, TimeProvider time, FolderLock? folderLock, StoreOptions options)
    {
        (_file, _time, _lock) = (file, time, folderLock);
        // Who only looks needs no writer.
        _writer = new Lazy<StoreWriter>(() => _file.Immutable
            ? throw new StoreException($"{FilePath} lies on a medium that cannot be written. Copy the folder to one that can.")
            : new StoreWriter(_file.Connect(SqliteOpenMode.ReadWrite), FilePath, options));
    }

    /// <summary>The store's file.</summary>
    public string FilePath => _file.Path;

    /// <summary>Runs that had been interrupted and were closed as incomplete by this opening; say so to the user.</summary>
    public IReadOnlyList<RunInfo> Interrupted { get; private set; } = [];

    /// <summary>How recording goes.</summary>
    public StoreHealth Health
    {
        get
        {
            if (!_writer.IsValueCreated)
            {
                return new StoreHealth(0, 0, 0, 0, null, null);
            }

            var (accepted, stored, waiting, refused) = _writer.Value.Queue.Counts;
            var ticks = _writer.Value.LastCommitUtcTicks;
            return new StoreHealth(
                accepted, stored, waiting, refused, _writer.Value.Trouble, ticks == 0 ? null : new DateTimeOffset(ticks, TimeSpan.Zero));
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
        try
        {
            Directory.CreateDirectory(Path.GetDirectoryName(path)!);
            var store = new SoakStore(StoreOpening.Prepare(path, mode), time, folderLock, options ?? new StoreOptions());
            if (mode == StoreMode.Recording)
            {
                store.CloseInterrupted();
            }

            return store;
        }
        catch (Exception trouble)
        {
            folderLock?.Dispose();
            throw trouble switch
            {
                StoreException => trouble,
                SqliteException sqlite => StoreException.From(sqlite, "Opening", path),
                IOException or UnauthorizedAccessException => new StoreException($"Opening {path} failed: {trouble.Message}", trouble),
                _ => trouble,
            };
        }
    }

    /// <summary>Begins a run; on return its row is on disk.</summary>
    /// <exception cref="StoreException">It cannot be stored; nothing has begun.</exception>
    public Task<RunRecorder> BeginRunAsync(RunStart start, CancellationToken cancellationToken = default) =>
        BeginRunAsync(start, null, cancellationToken);

    /// <summary>Begins a run that has an id already; it keeps it where it is free here.</summary>
    internal async Task<RunRecorder> BeginRunAsync(RunStart start, string? origin, CancellationToken cancellationToken)
    {
        var run = new ActiveRun();
        var started = start.StartedUtc ?? _time.GetUtcNow();
        await DoAsync(batch => RunBeginning.Write(batch, run, start, started, origin), cancellationToken);
        return new RunRecorder(_writer.Value, run);
    }

    /// <summary>Keeps a note with a run, whether it goes on or has ended.</summary>
    /// <exception cref="StoreException">There is no such run, or the note cannot be stored.</exception>
    public Task AddNoteAsync(string run, string text, string? author = null, double? atSeconds = null, CancellationToken cancellationToken = default) =>
        AddNoteAsync(run, new Note(_time.GetUtcNow(), author, text, atSeconds), cancellationToken);

    /// <summary>Keeps a step in the life of an alert whose run has ended.</summary>
    /// <exception cref="StoreException">There is no such run, or it cannot be stored.</exception>
    public Task AddAlertChangeAsync(string run, StoredAlertChange change, CancellationToken cancellationToken = default)
    {
        var key = KeyOf(run);
        return DoAsync(batch => RunRows.Write(batch, key, change), cancellationToken);
    }

    internal Task AddNoteAsync(string run, Note note, CancellationToken cancellationToken)
    {
        var key = KeyOf(run);
        return DoAsync(
            batch => batch.Run(
                "INSERT INTO notes (run, utc_ms, at_ms, author, text) VALUES (?,?,?,?,?)",
                key, note.Utc.ToUnixTimeMilliseconds(), note.AtSeconds is { } at ? StoreBatch.Milliseconds(at) : null, note.Author, note.Text),
            cancellationToken);
    }

    /// <summary>Keeps a file (a photograph, a measurement sheet) with a run.</summary>
    /// <exception cref="StoreException">There is no such run, the file is above 100 MB, or it cannot be stored.</exception>
    public Task AttachAsync(string run, string name, string mediaType, byte[] data, CancellationToken cancellationToken = default) =>
        AttachAsync(run, name, mediaType, data, _time.GetUtcNow(), cancellationToken);

    internal Task AttachAsync(string run, string name, string mediaType, byte[] data, DateTimeOffset utc, CancellationToken cancellationToken)
    {
        const int largest = 100_000_000;
        if (data.Length > largest)
        {
            throw new StoreException($"{name} has {data.Length} bytes; at most {largest} can be kept with a run. Keep it elsewhere and note where.");
        }

        var key = KeyOf(run);
        var sha256 = Convert.ToHexStringLower(System.Security.Cryptography.SHA256.HashData(data));
        return DoAsync(
            batch => batch.Run(
                "INSERT INTO attachments (run, utc_ms, name, media_type, bytes, sha256, data) VALUES (?,?,?,?,?,?,?)",
                key, utc.ToUnixTimeMilliseconds(), name, mediaType, (long)data.Length, sha256, data),
            cancellationToken);
    }

    /// <summary>Stores what waits and closes the file. A run not ended by then counts as interrupted at the next opening.</summary>
    public void Dispose()
    {
        if (_writer.IsValueCreated)
        {
            _writer.Value.Dispose();
        }

        if (_lock is not null && Health.Trouble is null)
        {
            StoreOpening.MarkClean(_file);
        }

        _lock?.Dispose();
    }

    private async Task DoAsync(Action<StoreBatch> apply, CancellationToken cancellationToken)
    {
        var action = new StoreAction(apply) { Hurry = true, GiveUpOnTrouble = true };
        if (!_writer.Value.Queue.TryAdd(new WriteItem(null, default, action)))
        {
            throw new StoreException($"Writing into {FilePath} failed: {_writer.Value.Trouble ?? "the store is being closed"}");
        }

        if (await action.Done.WaitAsync(cancellationToken) is { } trouble)
        {
            throw trouble;
        }
    }
}
