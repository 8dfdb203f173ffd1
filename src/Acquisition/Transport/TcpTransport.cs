using System.Globalization;
using System.Net.Sockets;

namespace Lampwarden.Acquisition.Transport;

/// <summary>A TCP connection to a meter, or to the terminal server a serial meter hangs on.</summary>
public sealed class TcpTransport : IMeterTransport
{
    private static readonly TimeSpan LongestConnect = TimeSpan.FromSeconds(3);
    private readonly TransportOptions _options;

    /// <summary>Makes the transport; opens nothing.</summary>
    public TcpTransport(TransportOptions options) => _options = options;

    /// <inheritdoc/>
    public string Place => $"{_options.Host}:{_options.Port}";

    /// <inheritdoc/>
    public async Task<MeterConnection> OpenAsync(CancellationToken cancellationToken)
    {
        if (!ushort.TryParse(_options.Port, NumberStyles.None, CultureInfo.InvariantCulture, out var number) || number == 0)
        {
            throw new TransportException(GapReason.PortMissing, $"'{_options.Port}' is no TCP port. Give a number from 1 to 65535; meters mostly listen on 5025.");
        }

        var client = new TcpClient { NoDelay = true };
        using var limit = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken);
        limit.CancelAfter(LongestConnect);
        try
        {
            await client.ConnectAsync(_options.Host, number, limit.Token);
            // A meter that loses its power says no goodbye: keep-alive makes the system notice within about half a minute,
            // long after the reply timeout did, but it frees the socket.
            client.Client.SetSocketOption(SocketOptionLevel.Socket, SocketOptionName.KeepAlive, true);
            client.Client.SetSocketOption(SocketOptionLevel.Tcp, SocketOptionName.TcpKeepAliveTime, 10);
            client.Client.SetSocketOption(SocketOptionLevel.Tcp, SocketOptionName.TcpKeepAliveInterval, 5);
            client.Client.SetSocketOption(SocketOptionLevel.Tcp, SocketOptionName.TcpKeepAliveRetryCount, 4);
            return new MeterConnection(client.GetStream(), client.Dispose);
        }
        catch (OperationCanceledException) when (!cancellationToken.IsCancellationRequested)
        {
            client.Dispose();
            throw new TransportException(GapReason.PortMissing,
                $"{Place} did not answer within {LongestConnect.TotalSeconds:0} s. Is the meter on, and is the address right?");
        }
        catch (SocketException error)
        {
            client.Dispose();
            throw new TransportException(GapReason.PortMissing,
                $"{Place} cannot be reached: {error.Message}. Is the meter on, its network interface enabled, and the address right?", error);
        }
        catch
        {
            client.Dispose();
            throw;
        }
    }
}
