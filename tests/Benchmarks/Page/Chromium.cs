using System.Diagnostics;
using System.Net.WebSockets;
using System.Text;
using System.Text.Json;

namespace Lampwarden.Benchmarks.Page;

/// <summary>The system's Chromium without a window, spoken to over its debugging protocol: enough to load a page and ask it things.</summary>
internal sealed class Chromium : IAsyncDisposable
{
    private readonly DirectoryInfo _profile = Directory.CreateTempSubdirectory("lampwarden-chromium-");
    private readonly ClientWebSocket _socket = new();
    private readonly byte[] _buffer = new byte[1 << 20];
    private Process? _process;
    private int _last;

    /// <summary>Starts it; null where there is none.</summary>
    public static async Task<Chromium?> StartAsync()
    {
        var folders = (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator);
        var path = new[] { "chromium", "chromium-browser", "google-chrome" }.SelectMany(name => folders.Select(folder => Path.Combine(folder, name))).FirstOrDefault(File.Exists);
        if (path is null)
        {
            return null;
        }

        var chromium = new Chromium();
        string[] arguments =
        [
            "--headless=new", "--no-sandbox", "--no-first-run", "--disable-background-networking", "--enable-precise-memory-info",
            "--remote-debugging-port=0", "--window-size=1440,900", $"--user-data-dir={chromium._profile.FullName}", "about:blank",
        ];
        chromium._process = Process.Start(new ProcessStartInfo(path, arguments) { RedirectStandardError = true, RedirectStandardOutput = true })!;
        _ = chromium._process.StandardOutput.ReadToEndAsync();
        string? line;
        while ((line = await chromium._process.StandardError.ReadLineAsync()) is not null && !line.Contains("DevTools listening on", StringComparison.Ordinal))
        {
        }

        _ = chromium._process.StandardError.ReadToEndAsync();
        var port = new Uri(line!.Split(' ')[^1]).Port;
        using var http = new HttpClient();
        var targets = JsonSerializer.Deserialize<JsonElement>(await http.GetStringAsync(new Uri($"http://127.0.0.1:{port}/json")));
        var target = targets.EnumerateArray().First(item => item.GetProperty("type").GetString() == "page");
        await chromium._socket.ConnectAsync(new Uri(target.GetProperty("webSocketDebuggerUrl").GetString()!), CancellationToken.None);
        await chromium.SendAsync("Page.enable");
        return chromium;
    }

    /// <summary>Loads an address anew.</summary>
    public Task GoAsync(Uri url) => SendAsync("Page.navigate", new { url = url.ToString() });

    /// <summary>What an expression of the page comes to; a promise is waited for.</summary>
    public async Task<JsonElement> AskAsync(string expression)
    {
        var answer = await SendAsync("Runtime.evaluate", new { expression, returnByValue = true, awaitPromise = true });
        if (answer.TryGetProperty("exceptionDetails", out var fault))
        {
            throw new InvalidOperationException(fault.ToString());
        }

        return answer.GetProperty("result").TryGetProperty("value", out var value) ? value : default;
    }

    /// <summary>Bytes of script objects that are really in use.</summary>
    public async Task<double> HeapBytesAsync()
    {
        await SendAsync("HeapProfiler.collectGarbage");
        return (await SendAsync("Runtime.getHeapUsage")).GetProperty("usedSize").GetDouble();
    }

    public async ValueTask DisposeAsync()
    {
        _socket.Dispose();
        if (_process is not null)
        {
            _process.Kill(entireProcessTree: true);
            await _process.WaitForExitAsync();
            _process.Dispose();
        }

        try
        {
            _profile.Delete(recursive: true);
        }
        catch (IOException)
        {
            // A child of the browser was still writing; the system's temporary folder is emptied sometime.
        }
    }

    private async Task<JsonElement> SendAsync(string method, object? parameters = null)
    {
        var id = ++_last;
        await _socket.SendAsync(JsonSerializer.SerializeToUtf8Bytes(new { id, method, @params = parameters ?? new { } }), WebSocketMessageType.Text, true, CancellationToken.None);
        while (true)
        {
            using var text = new MemoryStream();
            WebSocketReceiveResult part;
            do
            {
                part = await _socket.ReceiveAsync(_buffer, CancellationToken.None);
                text.Write(_buffer, 0, part.Count);
            }
            while (!part.EndOfMessage);

            var message = JsonSerializer.Deserialize<JsonElement>(Encoding.UTF8.GetString(text.ToArray()));
            if (message.TryGetProperty("id", out var answered) && answered.GetInt32() == id)
            {
                return message.TryGetProperty("result", out var result) ? result : throw new InvalidOperationException(message.ToString());
            }
        }
    }
}
