using System.Net;
using System.Text.Json;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>One message as a person's system got it.</summary>
internal sealed record Letter(string Bench, string What, string Cause, string Severity, string Text, IReadOnlyList<Letter> Group, DateTime ReceivedUtc);

/// <summary>The far end of a webhook, on loopback, that works or fails as told.</summary>
internal sealed class Inbox : IDisposable
{
    private readonly HttpListener _listener = new();
    private readonly List<Letter> _letters = [];

    public Inbox()
    {
        using (var probe = new System.Net.Sockets.TcpListener(IPAddress.Loopback, 0))
        {
            probe.Start();
            Port = ((IPEndPoint)probe.LocalEndpoint).Port;
        }

        _listener.Prefixes.Add($"http://127.0.0.1:{Port}/");
        _listener.Start();
        _ = Task.Run(AcceptAsync);
    }

    public int Port { get; }

    /// <summary>Status to answer; 0 to leave the caller waiting.</summary>
    public int Status { get; set; } = 204;

    public int Requests { get; private set; }

    /// <summary>Everything taken, groups opened up.</summary>
    public IReadOnlyList<Letter> Letters
    {
        get
        {
            lock (_letters)
            {
                return [.. _letters.SelectMany(letter => letter.Group.Count > 0 ? letter.Group : [letter])];
            }
        }
    }

    public int Messages
    {
        get
        {
            lock (_letters)
            {
                return _letters.Count;
            }
        }
    }

    /// <summary>A route of the configuration that leads here.</summary>
    public string Route(string name, string more = "") =>
        $$"""{ "kind": "webhook", "name": "{{name}}", {{more}} "webhook": { "url": "http://127.0.0.1:{{Port}}/hook" } }""";

    public Task<Letter> UntilAsync(Func<Letter, bool> match, string what, double seconds = 40) =>
        Wait.ForAsync(() => Letters.FirstOrDefault(match), what, seconds);

    public void Dispose() => _listener.Close();

    private async Task AcceptAsync()
    {
        try
        {
            while (true)
            {
                var context = await _listener.GetContextAsync();
                Requests++;
                _ = Task.Run(() => AnswerAsync(context));
            }
        }
        catch (Exception error) when (error is HttpListenerException or ObjectDisposedException)
        {
            // Closed.
        }
    }

    private async Task AnswerAsync(HttpListenerContext context)
    {
        try
        {
            using var body = await JsonDocument.ParseAsync(context.Request.InputStream);
            if (Status == 0)
            {
                return;
            }

            if (Status is >= 200 and < 300)
            {
                lock (_letters)
                {
                    _letters.Add(Read(body.RootElement));
                }
            }

            context.Response.StatusCode = Status;
            context.Response.Close();
        }
        catch (Exception error) when (error is HttpListenerException or ObjectDisposedException or JsonException)
        {
            // The caller went away.
        }
    }

    private static Letter Read(JsonElement message) => new(
        message.GetProperty("bench").GetString()!,
        message.GetProperty("what").GetString()!,
        message.GetProperty("cause").GetString()!,
        message.GetProperty("severity").GetString()!,
        message.GetProperty("text").GetString()!,
        message.GetProperty("changes") is { ValueKind: JsonValueKind.Array } changes ? [.. changes.EnumerateArray().Select(Read)] : [],
        DateTime.UtcNow);
}

/// <summary>Waits for what must come, and says what did not.</summary>
internal static class Wait
{
    public static async Task<T> ForAsync<T>(Func<T?> look, string what, double seconds = 40)
        where T : class
    {
        var start = System.Diagnostics.Stopwatch.GetTimestamp();
        while (System.Diagnostics.Stopwatch.GetElapsedTime(start).TotalSeconds < seconds)
        {
            if (look() is { } found)
            {
                return found;
            }

            await Task.Delay(25);
        }

        throw new BrokenPromiseException($"{what}: not within {seconds} s");
    }

    public static Task UntilAsync(Func<bool> so, string what, double seconds = 40) => ForAsync(() => so() ? "" : null, what, seconds);
}
