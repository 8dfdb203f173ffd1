using System.Globalization;
using System.Text;
using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Web.Live;

/// <summary>One event of the stream; its text is made once, when the first reader wants it.</summary>
/// <param name="number">Counts up by one.</param>
/// <param name="type">bench or readings.</param>
/// <param name="bench">Which bench it is about.</param>
/// <param name="data">The document.</param>
internal sealed class LiveEvent(long number, string type, string bench, object data)
{
    private byte[]? _json;

    public long Number => number;

    public string Type => type;

    public string Bench => bench;

    /// <summary>The document as JSON. Two readers may both make it; they make the same.</summary>
    public byte[] Json => _json ??= JsonSerializer.SerializeToUtf8Bytes(data, data.GetType(), Commands.Json.Compact);
}

/// <summary>A bench's instruments, of which only the newest are worth sending; so they have no place in the log.</summary>
internal sealed class NowEvent(long version, NowDocument document)
{
    private byte[]? _json;

    public long Version => version;

    public byte[] Json => _json ??= JsonSerializer.SerializeToUtf8Bytes(document, Commands.Json.Compact);
}

/// <summary>
/// The newest events, numbered. A reader asks for what came after the last number it has: nothing is kept for a reader, so
/// a slow or dead one costs nothing, and one that comes back in time misses nothing. Thread-safe.
/// </summary>
internal sealed class EventLog(int capacity)
{
    private readonly Lock _gate = new();
    private readonly LiveEvent?[] _ring = new LiveEvent?[capacity];
    private TaskCompletionSource _changed = new(TaskCreationOptions.RunContinuationsAsynchronously);
    private long _last;

    /// <summary>Marks this process: numbers of another one say nothing here.</summary>
    public string Epoch { get; } = Guid.NewGuid().ToString("N")[..8];

    /// <summary>Number of the newest event; 0 before the first.</summary>
    public long Last
    {
        get
        {
            lock (_gate)
            {
                return _last;
            }
        }
    }

    /// <summary>Adds one.</summary>
    public void Add(string type, string bench, object data)
    {
        lock (_gate)
        {
            _last++;
            _ring[_last % capacity] = new LiveEvent(_last, type, bench, data);
        }
    }

    /// <summary>Wakes the readers.</summary>
    public void Wake()
    {
        TaskCompletionSource changed;
        lock (_gate)
        {
            changed = _changed;
            _changed = new TaskCompletionSource(TaskCreationOptions.RunContinuationsAsynchronously);
        }

        changed.TrySetResult();
    }

    /// <summary>Completes at the next <see cref="Wake"/>.</summary>
    public Task Changed
    {
        get
        {
            lock (_gate)
            {
                return _changed.Task;
            }
        }
    }

    /// <summary>The events after a number.</summary>
    /// <returns>Null where some of them are no longer kept, or the number was never given: the reader must start anew.</returns>
    public IReadOnlyList<LiveEvent>? After(long number)
    {
        lock (_gate)
        {
            if (number > _last || number < 0 || _last - number > capacity)
            {
                return null;
            }

            var events = new LiveEvent[_last - number];
            for (var index = 0; index < events.Length; index++)
            {
                events[index] = _ring[(number + 1 + index) % capacity]!;
            }

            return events;
        }
    }

    /// <summary>The id that a browser sends back after a lost connection.</summary>
    public string IdOf(long number) => string.Create(CultureInfo.InvariantCulture, $"{Epoch}-{number}");

    /// <summary>The number of an id of this process.</summary>
    public bool TryNumber(string? id, out long number)
    {
        number = -1;
        return id is not null && id.StartsWith(Epoch + "-", StringComparison.Ordinal)
            && long.TryParse(id.AsSpan(Epoch.Length + 1), NumberStyles.None, CultureInfo.InvariantCulture, out number);
    }

    /// <summary>One event in the form of the HTML standard's event stream; JSON on one line needs no splitting.</summary>
    public static byte[] Frame(string type, string? id, ReadOnlySpan<byte> json)
    {
        var head = Encoding.UTF8.GetBytes(id is null ? $"event: {type}\ndata: " : $"id: {id}\nevent: {type}\ndata: ");
        var frame = new byte[head.Length + json.Length + 2];
        head.CopyTo(frame, 0);
        json.CopyTo(frame.AsSpan(head.Length));
        frame[^2] = frame[^1] = (byte)'\n';
        return frame;
    }
}
