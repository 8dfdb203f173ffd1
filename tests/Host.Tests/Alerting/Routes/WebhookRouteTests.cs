using System.Diagnostics;
using System.Net;
using System.Net.Sockets;
using System.Text;
using System.Text.Json;
using Lampwarden.Host.Alerting.Routes;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Alerting.Routes;

public sealed class WebhookRouteTests : IDisposable
{
    private readonly string _secretFile = Path.GetTempFileName();
    private readonly FakeTimeProvider _time = new(Told.Utc);

    public WebhookRouteTests() => File.WriteAllText(_secretFile, "correct horse\n");

    public void Dispose() => File.Delete(_secretFile);

    private WebhookRoute Make(Uri url) => new("hook", url, Secret.Read(_secretFile, null, "secretFile"), "shop-1", _time);

    private static CancellationToken Token => TestContext.Current.CancellationToken;

    [Fact]
    public async Task TellAsync_Taken_SendsTheContractsJson()
    {
        await using var server = new RawHttpServer(RawHttpServer.Status("204 No Content"));
        using var route = Make(server.Url);
        await route.TellAsync(Told.Change(), Token);
        var request = Assert.Single(server.Requests);
        Assert.StartsWith("POST /hook HTTP/1.1", request.Head, StringComparison.Ordinal);
        Assert.Equal("application/json", request.Header("Content-Type"));
        var json = JsonDocument.Parse(request.Body).RootElement;
        Assert.Equal("shop-1 bay-3 raised hard-short critical unacknowledged", string.Join(' ', new[] { "instance", "bench", "what", "cause", "severity", "state" }.Select(key => json.GetProperty(key).GetString())));
        Assert.Equal(Told.Utc, json.GetProperty("utc").GetDateTimeOffset());
        Assert.DoesNotContain("correct horse", request.Head + Encoding.UTF8.GetString(request.Body), StringComparison.Ordinal);
    }

    [Fact]
    public async Task TellAsync_Signed_AgreesWithOpenssl()
    {
        var openssl = Outside.Program("openssl");
        await using var server = new RawHttpServer(RawHttpServer.Status("200 OK"));
        using var route = Make(server.Url);
        await route.TellAsync(Told.Change(), Token);
        var request = server.Requests[0];
        using var process = Process.Start(new ProcessStartInfo(openssl, ["dgst", "-sha256", "-hmac", "correct horse", "-r"]) { RedirectStandardInput = true, RedirectStandardOutput = true })!;
        await process.StandardInput.BaseStream.WriteAsync(Encoding.ASCII.GetBytes(request.Header("Lampwarden-Timestamp") + "."), Token);
        await process.StandardInput.BaseStream.WriteAsync(request.Body, Token);
        process.StandardInput.Close();
        var theirs = (await process.StandardOutput.ReadToEndAsync(Token)).Split(' ')[0];
        Assert.Equal(theirs, request.Header("Lampwarden-Signature"));
        Assert.Equal(Told.Utc.ToUnixTimeSeconds().ToString(System.Globalization.CultureInfo.InvariantCulture), request.Header("Lampwarden-Timestamp"));
    }

    [Fact]
    public async Task TellAsync_TheSameChangeTwice_HasTheSameDeliveryId()
    {
        await using var server = new RawHttpServer(RawHttpServer.Status("200 OK"));
        using var route = Make(server.Url);
        await route.TellAsync(Told.Change(), Token);
        await route.TellAsync(Told.Change(), Token);
        await route.TellAsync(Told.Change(2), Token);
        var ids = server.Requests.Select(request => request.Header("Lampwarden-Delivery")).ToList();
        Assert.Equal(ids[0], ids[1]);
        Assert.NotEqual(ids[0], ids[2]);
    }

    [Theory]
    [InlineData("500 Internal Server Error")]
    [InlineData("502 Bad Gateway")]
    [InlineData("503 Service Unavailable")]
    [InlineData("408 Request Timeout")]
    [InlineData("429 Too Many Requests")]
    public async Task TellAsync_AnAnswerThatSaysLater_MayBeTriedAgain(string status)
    {
        await using var server = new RawHttpServer(RawHttpServer.Status(status, "Retry-After: 17\r\n"));
        using var route = Make(server.Url);
        var error = await Assert.ThrowsAsync<RouteException>(() => route.TellAsync(Told.Change(), Token));
        Assert.Equal(TimeSpan.FromSeconds(17), error.RetryAfter);
        Assert.Contains(status[..3], error.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("400 Bad Request")]
    [InlineData("401 Unauthorized")]
    [InlineData("404 Not Found")]
    [InlineData("410 Gone")]
    public async Task TellAsync_AnAnswerThatSaysNever_IsRefused(string status)
    {
        await using var server = new RawHttpServer(RawHttpServer.Status(status));
        using var route = Make(server.Url);
        await Assert.ThrowsAsync<RouteRefusedException>(() => route.TellAsync(Told.Change(), Token));
    }

    [Fact]
    public async Task TellAsync_Redirected_DoesNotFollow()
    {
        await using var elsewhere = new RawHttpServer(RawHttpServer.Status("200 OK"));
        await using var server = new RawHttpServer(RawHttpServer.Status("307 Temporary Redirect", $"Location: {elsewhere.Url}\r\n"));
        using var route = Make(server.Url);
        var error = await Assert.ThrowsAsync<RouteRefusedException>(() => route.TellAsync(Told.Change(), Token));
        Assert.Contains("redirects are not followed", error.Message, StringComparison.Ordinal);
        Assert.Empty(elsewhere.Requests);
    }

    [Theory]
    [InlineData("")]
    [InlineData("HTTP/1.1 2")]
    [InlineData("SSH-2.0-OpenSSH_9.2\r\n")]
    [InlineData("HTTP/9.9 banana\r\n\r\n")]
    public async Task TellAsync_NoAnswerOrNonsense_MayBeTriedAgain(string answer)
    {
        await using var server = new RawHttpServer(answer);
        using var route = Make(server.Url);
        await Assert.ThrowsAsync<RouteException>(() => route.TellAsync(Told.Change(), Token));
    }

    [Fact]
    public async Task TellAsync_EndlessHeaders_AreCutShort()
    {
        await using var server = new RawHttpServer(async (_, stream, token) =>
        {
            await stream.WriteAsync("HTTP/1.1 200 OK\r\n"u8.ToArray(), token);
            while (true)
            {
                await stream.WriteAsync(Encoding.ASCII.GetBytes($"X-Filler: {new string('x', 1000)}\r\n"), token);
            }
        });
        using var route = Make(server.Url);
        await Assert.ThrowsAsync<RouteException>(() => route.TellAsync(Told.Change(), Token));
    }

    [Fact]
    public async Task TellAsync_AnEndlessBody_IsNotRead()
    {
        await using var server = new RawHttpServer(async (_, stream, token) =>
        {
            await stream.WriteAsync("HTTP/1.1 200 OK\r\nContent-Type: text/plain\r\n\r\n"u8.ToArray(), token);
            while (true)
            {
                await stream.WriteAsync(new byte[65536], token);
            }
        });
        using var route = Make(server.Url);
        await route.TellAsync(Told.Change(), Token);
    }

    [Fact]
    public async Task TellAsync_AServerThatHangs_EndsWithTheToken()
    {
        await using var server = new RawHttpServer((_, _, token) => Task.Delay(Timeout.Infinite, token));
        using var route = Make(server.Url);
        using var soon = new CancellationTokenSource(TimeSpan.FromMilliseconds(200));
        await Assert.ThrowsAnyAsync<OperationCanceledException>(() => route.TellAsync(Told.Change(), soon.Token));
    }

    [Fact]
    public async Task TellAsync_NobodyListening_SaysWhereAndWhy()
    {
        using var route = Make(new Uri($"http://127.0.0.1:{FreePort()}/hook?key=private"));
        var error = await Assert.ThrowsAsync<RouteException>(() => route.TellAsync(Told.Change(), Token));
        Assert.Contains("127.0.0.1", error.Message, StringComparison.Ordinal);
        // An address may carry a key: only scheme, host and port are shown.
        Assert.DoesNotContain("private", error.Message, StringComparison.Ordinal);
    }

    internal static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }
}
