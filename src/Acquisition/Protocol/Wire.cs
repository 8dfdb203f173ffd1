using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>An open connection with its line splitter: one task reads it all the time, so that nothing old lies in wait as an answer.</summary>
internal sealed class Wire
{
    /// <summary>What to tell of lines no meter sends.</summary>
    public const string TooLong = "lines longer than 4096 bytes come in and are thrown away. Wrong baud rate, or not a meter?";

    private const double HeldUpSeconds = 1;
    private readonly Stream _stream;
    private readonly string _place;
    private readonly TimeProvider _time;
    private readonly LineSplitter _lines;

    public Wire(MeterConnection connection, string place, TimeProvider time, string lineEnd)
    {
        _lines = new LineSplitter(lineEnd: lineEnd);
        _stream = connection.Stream;
        _place = place;
        _time = time;
    }

    /// <summary>Set by the asking side to have the unfinished line dropped before the next bytes are looked at.</summary>
    public volatile bool DropUnfinished;

    /// <summary>Bytes of the unfinished line, for messages; a snapshot.</summary>
    public int UnfinishedBytes => _lines.PendingBytes;

    /// <summary>A line without end is coming in; a snapshot.</summary>
    public bool InLineTooLong => _lines.InLineTooLong;

    /// <summary>Reads until the wire is gone or the token says stop.</summary>
    /// <exception cref="TransportException">The wire is gone.</exception>
    public async Task PumpAsync(ILineSink sink, CancellationToken cancellationToken)
    {
        var lastRead = _time.GetTimestamp();
        var catchingUp = false;
        var room = _lines.Free();
        var reading = ReadSomeAsync(room, cancellationToken);
        while (true)
        {
            var count = await reading;
            if (DropUnfinished)
            {
                // The bytes just read sit behind the unfinished ones: forget those first.
                DropUnfinished = false;
                _lines.DropPending();
            }

            // Several lines at once after a long time: they piled up while we were held up, and only the last of them is of now.
            var now = _time.GetTimestamp();
            catchingUp = _time.GetElapsedTime(lastRead, now).TotalSeconds > HeldUpSeconds || (catchingUp && count == room.Length);
            lastRead = now;
            _lines.Received(count, now);

            // The next read goes on while these lines are looked at: the system's buffer holds 4 kB, and a flood would wait for us.
            room = _lines.Free();
            reading = ReadSomeAsync(room, cancellationToken);
            while (_lines.TryRead(out var line, out var first, out var last, out var tooLong))
            {
                if (tooLong)
                {
                    sink.OnLineTooLong(last);
                }
                else
                {
                    sink.OnLine(line, first, last, catchingUp && _lines.HoldsLine);
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

    private async ValueTask<int> ReadSomeAsync(Memory<byte> room, CancellationToken cancellationToken)
    {
        try
        {
            return await _stream.ReadAsync(room, cancellationToken) is > 0 and var count ? count : throw Gone(null);
        }
        catch (Exception error) when (error is ObjectDisposedException or InvalidOperationException or UnauthorizedAccessException
            or (IOException and not TransportException))
        {
            throw Gone(error);
        }
    }

    private TransportException Gone(Exception? error) => new(
        GapReason.Disconnected,
        $"the connection to {_place} is gone{(error is null ? "" : $" ({error.Message})")}; it is being reopened. If it stays away: cable, power, and whether it came back under another name.",
        error);
}
