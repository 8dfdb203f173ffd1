using System.Net;
using System.Net.Sockets;
using System.Text;

namespace Lampwarden.Host.Tests.Alerting.Routes;

/// <summary>One request as it came over the wire.</summary>
internal sealed record RawRequest(string Head, byte[] Body)
{
    public string? Header(string name) => Head.Split("\r\n")
        .FirstOrDefault(line => line.StartsWith(name + ":", StringComparison.OrdinalIgnoreCase))?[(name.Length + 1)..].Trim();
}

/// <summary>A listener on loopback that answers each request as the test says, in bytes: it can fail in ways no web server would.</summary>
internal sealed class RawHttpServer : IAsyncDisposable
{
    private readonly TcpListener _listener = new(IPAddress.Loopback, 0);
    private readonly CancellationTokenSource _stop = new();
    private readonly Func<RawRequest, NetworkStream, CancellationToken, Task> _answer;
    private readonly List<RawRequest> _requests = [];
    private readonly Task _loop;

    public RawHttpServer(Func<RawRequest, NetworkStream, CancellationToken, Task> answer)
    {
        _answer = answer;
        _listener.Start();
        _loop = AcceptAsync();
    }

    public RawHttpServer(string answer)
        : this((_, stream, token) => stream.WriteAsync(Encoding.ASCII.GetBytes(answer), token).AsTask())
    {
    }

    public Uri Url => new($"http://127.0.0.1:{((IPEndPoint)_listener.LocalEndpoint).Port}/hook");

    public IReadOnlyList<RawRequest> Requests
    {
        get
        {
            lock (_requests)
            {
                return [.. _requests];
            }
        }
    }

    public static string Status(string status, string headers = "") => $"HTTP/1.1 {status}\r\n{headers}Content-Length: 0\r\nConnection: close\r\n\r\n";

    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        _listener.Dispose();
        await _loop;
        _stop.Dispose();
    }

    private async Task AcceptAsync()
    {
        var talks = new List<Task>();
        try
        {
            while (true)
            {
                talks.Add(TalkAsync(await _listener.AcceptTcpClientAsync(_stop.Token)));
            }
        }
        catch (Exception error) when (error is OperationCanceledException or SocketException or InvalidOperationException or ObjectDisposedException)
        {
            await Task.WhenAll(talks);
        }
    }

    private async Task TalkAsync(TcpClient client)
    {
        using (client)
        {
            try
            {
                var stream = client.GetStream();
                var request = await ReadAsync(stream);
                lock (_requests)
                {
                    _requests.Add(request);
                }

                await _answer(request, stream, _stop.Token);
            }
            catch (Exception error) when (error is IOException or OperationCanceledException or SocketException)
            {
                // The client went away, or the test is over.
            }
        }
    }

    private async Task<RawRequest> ReadAsync(NetworkStream stream)
    {
        var head = new StringBuilder();
        var one = new byte[1];
        while (!head.ToString().EndsWith("\r\n\r\n", StringComparison.Ordinal) && await stream.ReadAsync(one, _stop.Token) == 1)
        {
            head.Append((char)one[0]);
        }

        var request = new RawRequest(head.ToString(), []);
        var body = new byte[int.Parse(request.Header("Content-Length") ?? "0", System.Globalization.CultureInfo.InvariantCulture)];
        await stream.ReadExactlyAsync(body, _stop.Token);
        return request with { Body = body };
    }
}
