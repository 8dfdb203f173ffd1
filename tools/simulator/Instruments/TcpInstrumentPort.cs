using System.Net;
using System.Net.Sockets;
using System.Threading.Channels;

namespace Lampwarden.Simulator.Instruments;

/// <summary>A TCP listener on the loopback address with room for one client, as instruments have; a second one pushes the first out.</summary>
public sealed class TcpInstrumentPort : IInstrumentPort
{
    private readonly Lock _gate = new();
    private readonly Channel<byte[]> _received = Channel.CreateUnbounded<byte[]>(new UnboundedChannelOptions { SingleReader = true });
    private readonly int _port;
    private TcpListener? _listener;
    private Socket? _client;
    private ReadOnlyMemory<byte> _rest;

    /// <summary>Listens.</summary>
    /// <param name="port">Number, or 0 for any free one.</param>
    /// <exception cref="SocketException">The number is taken.</exception>
    public TcpInstrumentPort(int port = 0)
    {
        _port = port;
        PlugIn();
        _port = ((IPEndPoint)_listener!.LocalEndpoint).Port;
    }

    /// <summary>The number a client connects to.</summary>
    public int Port => _port;

    /// <inheritdoc/>
    public string Place => $"127.0.0.1:{_port}";

    /// <inheritdoc/>
    public bool IsPluggedIn => _listener is not null;

    /// <inheritdoc/>
    public void PlugIn()
    {
        lock (_gate)
        {
            if (_listener is not null)
            {
                return;
            }

            var listener = new TcpListener(IPAddress.Loopback, _port);
            listener.Start();
            _listener = listener;
            _ = AcceptAsync(listener);
        }
    }

    /// <inheritdoc/>
    public void Unplug()
    {
        lock (_gate)
        {
            _listener?.Dispose();
            _listener = null;
            _client?.Close(0);
            _client = null;
        }
    }

    /// <inheritdoc/>
    public async ValueTask<int> ReadAsync(Memory<byte> buffer, CancellationToken cancellationToken)
    {
        if (_rest.IsEmpty)
        {
            _rest = await _received.Reader.ReadAsync(cancellationToken);
        }

        var count = Math.Min(buffer.Length, _rest.Length);
        _rest[..count].CopyTo(buffer);
        _rest = _rest[count..];
        return count;
    }

    /// <inheritdoc/>
    public async ValueTask WriteAsync(ReadOnlyMemory<byte> bytes, CancellationToken cancellationToken)
    {
        try
        {
            while (!bytes.IsEmpty && _client is { } client)
            {
                bytes = bytes[await client.SendAsync(bytes, cancellationToken)..];
            }
        }
        catch (Exception error) when (error is SocketException or ObjectDisposedException)
        {
            // The client has left; its reader task notices.
        }
    }

    /// <inheritdoc/>
    public ValueTask DisposeAsync()
    {
        Unplug();
        return ValueTask.CompletedTask;
    }

    private async Task AcceptAsync(TcpListener listener)
    {
        try
        {
            while (true)
            {
                var client = await listener.AcceptSocketAsync();
                client.NoDelay = true;
                lock (_gate)
                {
                    _client?.Close(0);
                    _client = _listener == listener ? client : null;
                }

                _ = ReceiveAsync(client);
            }
        }
        catch (Exception error) when (error is SocketException or ObjectDisposedException or InvalidOperationException)
        {
            // Unplugged.
        }
    }

    private async Task ReceiveAsync(Socket client)
    {
        var buffer = new byte[4096];
        try
        {
            while (await client.ReceiveAsync(buffer) is var count && count > 0)
            {
                _received.Writer.TryWrite(buffer[..count]);
            }
        }
        catch (Exception error) when (error is SocketException or ObjectDisposedException)
        {
            // The client has left, or the cable was pulled.
        }
        finally
        {
            client.Dispose();
        }
    }
}
