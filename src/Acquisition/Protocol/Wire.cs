using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>Takes the lines of a wire as they arrive. Called by the one task that reads the wire.</summary>
internal interface ILineSink
{
    /// <summary>A finished line; the span is valid during the call only.</summary>
    void OnLine(ReadOnlySpan<byte> line, long firstByteStamp, long lastByteStamp);

    /// <summary>A line beyond the limit was dropped.</summary>
    void OnLineTooLong(long stamp);

    /// <summary>Waits until the sink can take more; completed at once when it can.</summary>
    ValueTask RoomAsync(CancellationToken cancellationToken);
}

/// <summary>An open connection with its line splitter: one task reads it all the time, so that nothing old lies in wait as an answer.</summary>
internal sealed class Wire
{
    private readonly Stream _stream;
    private readonly string _place;
    private readonly TimeProvider _time;
    private readonly LineSplitter _lines = new();

    public Wire(MeterConnection connection, string place, TimeProvider time)
    {
        _stream = connection.Stream;
        _place = place;
        _time = time;
    }

    /// <summary>Set by the asking side to have the unfinished line dropped before the next bytes are looked at.</summary>
    public volatile bool DropUnfinished;

    /// <summary>Bytes of the unfinished line, for messages; a snapshot.</summary>
    public int UnfinishedBytes => _lines.PendingBytes;

    /// <summary>Reads until the wire is gone or the token says stop.</summary>
    /// <exception cref="TransportException">The wire is gone.</exception>
    public async Task PumpAsync(ILineSink sink, CancellationToken cancellationToken)
    {
        while (true)
        {
            int count;
            try
            {
                count = await _stream.ReadAsync(_lines.Free(), cancellationToken);
            }
            catch (Exception error) when (error is IOException or ObjectDisposedException or InvalidOperationException or UnauthorizedAccessException)
            {
                throw Gone(error);
            }

            if (count == 0)
            {
                throw Gone(null);
            }

            if (DropUnfinished)
            {
                // The bytes just read sit behind the unfinished ones: forget those first.
                DropUnfinished = false;
                _lines.DropPending();
            }

            _lines.Received(count, _time.GetTimestamp());
            while (_lines.TryRead(out var line, out var first, out var last, out var tooLong))
            {
                if (tooLong)
                {
                    sink.OnLineTooLong(last);
                }
                else
                {
                    sink.OnLine(line, first, last);
                }
            }

            await sink.RoomAsync(cancellationToken);
        }
    }

    /// <summary>Sends a command; the line feed is added here.</summary>
    /// <exception cref="TransportException">The wire is gone.</exception>
    public async ValueTask SendAsync(ReadOnlyMemory<byte> command, CancellationToken cancellationToken)
    {
        try
        {
            await _stream.WriteAsync(command, cancellationToken);
        }
        catch (Exception error) when (error is IOException or ObjectDisposedException or InvalidOperationException or UnauthorizedAccessException)
        {
            throw Gone(error);
        }
    }

    private TransportException Gone(Exception? error) => new(
        GapReason.Disconnected,
        $"the connection to {_place} is gone{(error is null ? "" : $" ({error.Message})")}; it is being reopened. If it stays away: cable, power, and whether it came back under another name.",
        error);
}
