namespace Lampwarden.Acquisition.Protocol;

/// <summary>Takes the lines of a wire as they arrive. Called by the one task that reads the wire.</summary>
internal interface ILineSink
{
    /// <summary>A finished line; the span is valid during the call only.</summary>
    /// <param name="line">Its bytes, without the end.</param>
    /// <param name="firstByteStamp">Arrival of its first byte.</param>
    /// <param name="lastByteStamp">Arrival of its end.</param>
    /// <param name="stale">It lay in the system's buffer while this program was held up, so its time stamps are wrong.</param>
    void OnLine(ReadOnlySpan<byte> line, long firstByteStamp, long lastByteStamp, bool stale);

    /// <summary>A line beyond the limit was dropped.</summary>
    void OnLineTooLong(long stamp);

    /// <summary>Waits until the sink can take more; completed at once when it can.</summary>
    ValueTask RoomAsync(CancellationToken cancellationToken);
}
