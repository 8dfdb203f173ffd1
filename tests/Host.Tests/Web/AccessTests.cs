using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Tests.Web.Support;
using Lampwarden.Host.Web.Access;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Web;

/// <summary>Each rule of access, with a request that breaks it.</summary>
public sealed class AccessTests : IDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lampwarden-token-");
    private readonly string _token = PageToken.Make();

    private string TokenFile
    {
        get
        {
            var path = Path.Combine(_folder.FullName, "page.token");
            File.WriteAllText(path, _token + "\n");
            return path;
        }
    }

    public void Dispose() => _folder.Delete(recursive: true);

    [Theory]
    [InlineData("http://0.0.0.0:5080")]
    [InlineData("http://192.168.7.20:5080")]
    [InlineData("http://bench-shop:5080")]
    public void Address_ReachableFromOutsideWithoutToken_IsRefusedAndSaysHowToMakeOne(string address)
    {
        var error = Assert.Throws<ConfigurationException>(() => PageAddress.Of(new WebOptions { Address = address }, "bench.json"));

        Assert.Contains("web.tokenFile", error.Message, StringComparison.Ordinal);
        Assert.Contains("lampwarden token page.token", error.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("http://127.0.0.1:5080")]
    [InlineData("http://localhost:5080")]
    [InlineData("http://[::1]:5080")]
    public void Address_OfThisMachine_NeedsNoToken(string address) =>
        Assert.Null(PageAddress.Of(new WebOptions { Address = address }, "bench.json").Token);

    [Fact]
    public void Address_TokenTooShort_IsRefusedWithoutShowingIt()
    {
        var path = Path.Combine(_folder.FullName, "short.token");
        File.WriteAllText(path, "hunter2-hunter2");

        var error = Assert.Throws<ConfigurationException>(() => PageAddress.Of(new WebOptions { TokenFile = path }, "bench.json"));

        Assert.Contains("24", error.Message, StringComparison.Ordinal);
        Assert.DoesNotContain("hunter2", error.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public async Task Loopback_WithoutToken_IsOpen()
    {
        await using var page = await QuietPage.OpenAsync();

        Assert.Equal(HttpStatusCode.OK, (await GetAsync(page, "/api/benches")).StatusCode);
        Assert.Equal(HttpStatusCode.OK, (await GetAsync(page, "/")).StatusCode);
    }

    [Fact]
    public async Task Loopback_CalledByAForeignName_IsRefused()
    {
        await using var page = await QuietPage.OpenAsync();

        var answer = await GetAsync(page, "/api/benches", request => request.Headers.Host = "benches.example");

        Assert.Equal(HttpStatusCode.MisdirectedRequest, answer.StatusCode);
    }

    [Fact]
    public async Task Loopback_ForwardedByAProxy_IsRefusedWithoutToken()
    {
        await using var page = await QuietPage.OpenAsync();

        var answer = await GetAsync(page, "/api/benches", request => request.Headers.Add("X-Forwarded-For", "203.0.113.7"));

        Assert.Equal(HttpStatusCode.Forbidden, answer.StatusCode);
    }

    [Theory]
    [InlineData("http://benches.example")]
    [InlineData("null")]
    [InlineData("http://localhost:1")]
    public async Task Write_FromAnotherOrigin_IsRefused(string origin)
    {
        await using var page = await QuietPage.OpenAsync();

        var answer = await PostAsync(page, "/api/benches/attic/soak", request => request.Headers.Add("Origin", origin));

        Assert.Equal(HttpStatusCode.Forbidden, answer.StatusCode);
    }

    [Fact]
    public async Task Write_FromThePageItself_IsTaken()
    {
        await using var page = await QuietPage.OpenAsync();

        var answer = await PostAsync(page, "/api/benches/attic/bring-up/next", request =>
        {
            request.Headers.Add("Origin", page.Url.GetLeftPart(UriPartial.Authority));
            request.Headers.Add("Sec-Fetch-Site", "same-origin");
        });

        // The bench has nothing to bring up: a conflict, not a refusal.
        Assert.Equal(HttpStatusCode.Conflict, answer.StatusCode);
    }

    [Theory]
    [InlineData("cross-site")]
    [InlineData("same-site")]
    public async Task Request_TheBrowserCallsForeign_IsRefusedForReadingToo(string site)
    {
        await using var page = await QuietPage.OpenAsync();

        Assert.Equal(HttpStatusCode.Forbidden, (await GetAsync(page, "/api/benches", request => request.Headers.Add("Sec-Fetch-Site", site))).StatusCode);
        Assert.Equal(HttpStatusCode.Forbidden, (await PostAsync(page, "/api/session", request => request.Headers.Add("Sec-Fetch-Site", site))).StatusCode);
    }

    [Theory]
    [InlineData("text/plain")]
    [InlineData("application/x-www-form-urlencoded")]
    public async Task Write_AsAFormCouldSendIt_IsRefused(string type)
    {
        await using var page = await QuietPage.OpenAsync();

        var answer = await PostAsync(page, "/api/benches/attic/soak", request => request.Content = new StringContent("{\"unit\":\"short\"}", MediaTypeHeaderValue.Parse(type)));

        Assert.Equal(HttpStatusCode.UnsupportedMediaType, answer.StatusCode);
    }

    [Fact]
    public async Task Token_MissingOrWrong_IsRefused_RightIsTaken()
    {
        await using var page = await QuietPage.OpenAsync(new WebOptions { TokenFile = TokenFile });

        Assert.Equal(HttpStatusCode.Unauthorized, (await GetAsync(page, "/api/benches")).StatusCode);
        Assert.Equal(HttpStatusCode.Unauthorized, (await GetAsync(page, "/api/events")).StatusCode);
        Assert.Equal(HttpStatusCode.Unauthorized, (await GetAsync(page, "/api/benches", Bearer(PageToken.Make()))).StatusCode);
        Assert.Equal(HttpStatusCode.Unauthorized, (await GetAsync(page, "/metrics")).StatusCode);
        Assert.Equal(HttpStatusCode.OK, (await GetAsync(page, "/api/benches", Bearer(_token))).StatusCode);
        // The page's own files tell how to make a token, and nothing else.
        Assert.Equal(HttpStatusCode.OK, (await GetAsync(page, "/")).StatusCode);
    }

    [Fact]
    public async Task Token_Required_OnAnAddressOthersCanReach()
    {
        await using var page = await QuietPage.OpenAsync(new WebOptions { Address = "http://0.0.0.0:0", TokenFile = TokenFile });

        Assert.Equal(HttpStatusCode.Unauthorized, (await GetAsync(page, "/api/runs")).StatusCode);
    }

    [Fact]
    public async Task Session_RightToken_GivesACookieThatScriptsAndOtherSitesCannotUse()
    {
        await using var page = await QuietPage.OpenAsync(new WebOptions { TokenFile = TokenFile });

        var entered = await PostAsync(page, "/api/session", request => request.Content = JsonContent.Create(new { token = _token }));

        Assert.Equal(HttpStatusCode.NoContent, entered.StatusCode);
        var cookie = Assert.Single(entered.Headers.GetValues("Set-Cookie"));
        Assert.Contains("httponly", cookie, StringComparison.OrdinalIgnoreCase);
        Assert.Contains("samesite=strict", cookie, StringComparison.OrdinalIgnoreCase);
        Assert.DoesNotContain(_token, cookie, StringComparison.Ordinal);
        Assert.Equal(HttpStatusCode.OK, (await GetAsync(page, "/api/benches", request => request.Headers.Add("Cookie", cookie.Split(';')[0]))).StatusCode);
    }

    [Fact]
    public void Pass_ChangedOrOutOfDate_IsRefused()
    {
        var token = PageToken.Read(TokenFile);
        var now = DateTimeOffset.UnixEpoch.AddDays(20000);
        var pass = token.MakePass(now.AddDays(1));

        Assert.True(token.Accepts(pass, now));
        Assert.False(token.Accepts(pass, now.AddDays(2)));
        Assert.False(token.Accepts("9" + pass, now));
        Assert.False(token.Accepts(pass[..^1] + (pass[^1] == '0' ? '1' : '0'), now));
        Assert.False(token.Accepts("", now));
        File.WriteAllText(Path.Combine(_folder.FullName, "page.token"), PageToken.Make());
        Assert.False(PageToken.Read(Path.Combine(_folder.FullName, "page.token")).Accepts(pass, now));
    }

    [Fact]
    public async Task WrongTokens_BeyondTheLimit_MustWait_EvenWithTheRightOne()
    {
        var time = new FakeTimeProvider();
        await using var page = await QuietPage.OpenAsync(new WebOptions { TokenFile = TokenFile }, time);
        for (var attempt = 0; attempt < WrongTokens.Allowed; attempt++)
        {
            Assert.Equal(HttpStatusCode.Unauthorized, (await GetAsync(page, "/api/benches", Bearer("guess"))).StatusCode);
        }

        var refused = await GetAsync(page, "/api/benches", Bearer(_token));
        Assert.Equal(HttpStatusCode.TooManyRequests, refused.StatusCode);
        Assert.True(refused.Headers.RetryAfter?.Delta > TimeSpan.Zero);
        var entering = await PostAsync(page, "/api/session", request => request.Content = JsonContent.Create(new { token = _token }));
        Assert.Equal(HttpStatusCode.TooManyRequests, entering.StatusCode);

        time.Advance(WrongTokens.Window);
        Assert.Equal(HttpStatusCode.OK, (await GetAsync(page, "/api/benches", Bearer(_token))).StatusCode);
    }

    [Fact]
    public void WrongTokens_FromManyAddresses_AreLimitedTogether()
    {
        var wrong = new WrongTokens(new FakeTimeProvider());
        for (var address = 0; address < WrongTokens.AllowedTogether; address++)
        {
            wrong.Count(new IPAddress([10, 0, 0, (byte)address]));
        }

        Assert.True(wrong.WaitFor(IPAddress.Parse("10.9.9.9")) > TimeSpan.Zero);
    }

    [Fact]
    public void WrongTokens_FromOneNetworkOfIpv6_CountAsOne()
    {
        var wrong = new WrongTokens(new FakeTimeProvider());
        for (var host = 1; host <= WrongTokens.Allowed; host++)
        {
            wrong.Count(IPAddress.Parse($"2001:db8::{host}"));
        }

        Assert.True(wrong.WaitFor(IPAddress.Parse("2001:db8::ffff")) > TimeSpan.Zero);
        Assert.Equal(TimeSpan.Zero, wrong.WaitFor(IPAddress.Parse("2001:db9::1")));
    }

    [Fact]
    public async Task EveryAnswer_CarriesTheHeadersThatBindTheBrowser()
    {
        await using var page = await QuietPage.OpenAsync();
        foreach (var path in new[] { "/", "/app.js", "/api/benches", "/api/nothing", "/nothing" })
        {
            var answer = await GetAsync(page, path);

            var policy = Assert.Single(answer.Headers.GetValues("Content-Security-Policy"));
            Assert.StartsWith("default-src 'none'", policy, StringComparison.Ordinal);
            Assert.DoesNotContain("unsafe", policy, StringComparison.Ordinal);
            Assert.DoesNotContain("http", policy, StringComparison.Ordinal);
            Assert.Equal("nosniff", Assert.Single(answer.Headers.GetValues("X-Content-Type-Options")));
            Assert.Equal("no-referrer", Assert.Single(answer.Headers.GetValues("Referrer-Policy")));
            Assert.False(answer.Headers.Contains("Server"));
            Assert.False(answer.Headers.Contains("Access-Control-Allow-Origin"));
        }
    }

    [Fact]
    public async Task Body_TooLarge_IsRefused()
    {
        await using var page = await QuietPage.OpenAsync();

        var answer = await PostAsync(page, "/api/benches/attic/notes", request => request.Content = JsonContent.Create(new { text = new string('x', 100_000) }));

        Assert.Equal(HttpStatusCode.RequestEntityTooLarge, answer.StatusCode);
    }

    private static Action<HttpRequestMessage> Bearer(string token) => request => request.Headers.Authorization = new AuthenticationHeaderValue("Bearer", token);

    private static Task<HttpResponseMessage> GetAsync(QuietPage page, string path, Action<HttpRequestMessage>? with = null) => SendAsync(page, HttpMethod.Get, path, with);

    private static Task<HttpResponseMessage> PostAsync(QuietPage page, string path, Action<HttpRequestMessage>? with = null) => SendAsync(page, HttpMethod.Post, path, with);

    private static async Task<HttpResponseMessage> SendAsync(QuietPage page, HttpMethod method, string path, Action<HttpRequestMessage>? with)
    {
        using var request = new HttpRequestMessage(method, path);
        request.Content = method == HttpMethod.Post ? JsonContent.Create(new { }) : null;
        with?.Invoke(request);
        return await page.Client.SendAsync(request, HttpCompletionOption.ResponseHeadersRead, TestContext.Current.CancellationToken);
    }
}
