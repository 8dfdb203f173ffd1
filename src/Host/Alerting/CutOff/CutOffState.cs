using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>Where one bench's cut-off stands.</summary>
public enum CutOffPosition
{
    /// <summary>The contactor may be closed; keep-alives, where used, are sent.</summary>
    Armed,

    /// <summary>A finding opened it. Only a person's reset leaves this state.</summary>
    Tripped,

    /// <summary>Keep-alives stopped for so long that the contactor has opened by itself. Only a person's reset leaves this state.</summary>
    Lapsed,
}

/// <summary>What must outlive the process: a restart never closes a contactor.</summary>
/// <param name="Position">Where it stands.</param>
/// <param name="Utc">Since when.</param>
/// <param name="Why">The finding, or who reset it.</param>
/// <param name="LastKeepAliveUtc">When the last keep-alive was sent; null for none.</param>
public sealed record CutOffState(CutOffPosition Position, DateTimeOffset Utc, string Why, DateTimeOffset? LastKeepAliveUtc = null);

/// <summary>The state of one bench's cut-off on disk, with every trip and reset beside it, in <c>cut-off/</c> of the record folder.</summary>
public sealed class CutOffFile
{
    private readonly string _folder;
    private readonly string _name;

    /// <summary>Opens the place; the folder is made.</summary>
    public CutOffFile(string recordFolder, string bench)
    {
        _folder = Path.Combine(recordFolder, "cut-off");
        Directory.CreateDirectory(_folder);
        _name = string.Concat(bench.Select(letter => char.IsAsciiLetterOrDigit(letter) || letter is '-' or '_' ? letter : '_'));
    }

    /// <summary>A person's wish to reset lies here until it is carried out.</summary>
    public string ResetPath => Path.Combine(_folder, _name + ".reset.json");

    /// <summary>Lays down a person's wish to reset, whole or not at all.</summary>
    /// <exception cref="IOException">The disk does not take it.</exception>
    public void Wish(string by)
    {
        File.WriteAllText(ResetPath + ".new", by);
        File.Move(ResetPath + ".new", ResetPath, overwrite: true);
    }

    /// <summary>The state as last stored; null where there is none. One that cannot be read counts as tripped.</summary>
    public CutOffState? Load()
    {
        try
        {
            return File.Exists(StatePath) ? JsonSerializer.Deserialize<CutOffState>(File.ReadAllText(StatePath), Json.Compact) : null;
        }
        catch (Exception error) when (error is JsonException or IOException or UnauthorizedAccessException)
        {
            return new CutOffState(CutOffPosition.Tripped, DateTimeOffset.MinValue, $"its state on disk cannot be read: {error.Message}");
        }
    }

    /// <summary>Stores the state in one step: a kill leaves the old one or the new one.</summary>
    /// <exception cref="IOException">The disk does not take it.</exception>
    public void Save(CutOffState state)
    {
        File.WriteAllText(StatePath + ".new", JsonSerializer.Serialize(state, Json.Compact));
        File.Move(StatePath + ".new", StatePath, overwrite: true);
    }

    /// <summary>Appends to the record of trips and resets, and waits for the disk.</summary>
    /// <exception cref="IOException">The disk does not take it.</exception>
    public void Record(object entry)
    {
        using var file = new FileStream(Path.Combine(_folder, "record.jsonl"), FileMode.Append, FileAccess.Write, FileShare.ReadWrite);
        file.Write(JsonSerializer.SerializeToUtf8Bytes(entry, Json.Compact));
        file.WriteByte((byte)'\n');
        file.Flush(flushToDisk: true);
    }

    private string StatePath => Path.Combine(_folder, _name + ".json");
}
