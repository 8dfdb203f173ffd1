using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Alerting;

/// <summary>
/// Stores the alerts of the watcher itself, which belong to no run: one JSON line a change in <c>watcher-alerts.jsonl</c>
/// beside the store, on disk before anybody is told. Not thread-safe: owned by the dispatch.
/// </summary>
public sealed class ServiceAlertLog(string folder)
{
    /// <summary>Name of the file in the record folder.</summary>
    public const string FileName = "watcher-alerts.jsonl";

    private const long LargestBytes = 8 << 20;

    private readonly string _path = Path.Combine(folder, FileName);

    /// <summary>Appends one change and waits for the disk.</summary>
    /// <returns>Why it could not be stored; null when it is on disk.</returns>
    public Exception? Append(AlertChange change)
    {
        try
        {
            if (File.Exists(_path) && new FileInfo(_path).Length > LargestBytes)
            {
                File.Move(_path, _path + ".1", overwrite: true);
            }

            using var file = new FileStream(_path, FileMode.Append, FileAccess.Write, FileShare.Read);
            file.Write(JsonSerializer.SerializeToUtf8Bytes(change, Json.Compact));
            file.WriteByte((byte)'\n');
            file.Flush(flushToDisk: true);
            return null;
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            return error;
        }
    }
}
