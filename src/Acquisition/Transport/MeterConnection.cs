namespace Lampwarden.Acquisition.Transport;

/// <summary>An open wire: its bytes, and how to close it. Closing never takes longer than two seconds.</summary>
public sealed class MeterConnection : IAsyncDisposable
{
    private static readonly TimeSpan LongestClose = TimeSpan.FromSeconds(2);
    private readonly Action _close;
    private int _closed;

    /// <summary>Wraps an open stream.</summary>
    /// <param name="stream">Bytes from and to the meter; its reads must honour their token.</param>
    /// <param name="close">Closes everything behind the stream; called once, on a pool thread.</param>
    public MeterConnection(Stream stream, Action close)
    {
        Stream = stream;
        _close = close;
    }

    /// <summary>Bytes from and to the meter.</summary>
    public Stream Stream { get; }

    /// <summary>
    /// Closes the wire. A driver that does not come back is left behind on its pool thread after two seconds:
    /// one leaked handle is a smaller evil than a service that cannot be stopped.
    /// </summary>
    public async ValueTask DisposeAsync()
    {
        if (Interlocked.Exchange(ref _closed, 1) != 0)
        {
            return;
        }

        try
        {
            await Task.Run(_close).WaitAsync(LongestClose);
        }
        catch (Exception error) when (error is TimeoutException or IOException or ObjectDisposedException
            or InvalidOperationException or UnauthorizedAccessException)
        {
            // The wire is being given up: whatever the driver says about it changes nothing for us.
        }
    }
}
