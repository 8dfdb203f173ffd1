using System.Net;
using System.Net.Http.Json;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Tests.Web.Support;
using Lampwarden.Host.Web.Api;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Web;

/// <summary>How the watcher itself does, as the page is told.</summary>
public sealed class WatcherTests
{
    private static CancellationToken Token => TestContext.Current.CancellationToken;

    [Fact]
    public async Task OpenAlerts_ADeadRoute_IsToldUntilItIsAcknowledgedAndGone()
    {
        await using var dispatch = new AlertDispatch(new AlertRules(), null, new FakeTimeProvider(), NullLogger.Instance);
        var watcher = new Watcher(dispatch);
        Assert.Empty(watcher.OpenAlerts);

        dispatch.Raise(AlertCauses.RouteDown, Severity.Warning, "'mail' does not answer.");
        var alert = Assert.Single(watcher.OpenAlerts);
        Assert.True(watcher.Acknowledge(alert.Number, "somebody"));
        Assert.Equal(AlertState.Acknowledged, Assert.Single(watcher.OpenAlerts).State);
        Assert.False(watcher.Acknowledge(alert.Number + 7, null));

        dispatch.Clear(AlertCauses.RouteDown);
        Assert.Empty(watcher.OpenAlerts);
    }

    [Fact]
    public async Task Watcher_OverHttp_TriesARouteAndSaysWhatCameOfIt()
    {
        Outside.Need(File.Exists("/bin/true"), "there is no /bin/true");
        await using var page = await QuietPage.OpenAsync(QuietPage.TwoRoutes());
        var report = await page.Client.GetFromJsonAsync<JsonElement>(new Uri("/api/watcher", UriKind.Relative), Token);
        Assert.Equal(["works", "breaks"], report.GetProperty("routes").EnumerateArray().Select(route => route.GetProperty("name").GetString()));
        Assert.Equal("armed", report.GetProperty("cutOffs")[0].GetProperty("position").GetString());

        Assert.Equal((HttpStatusCode.OK, true), await TryAsync("works"));
        Assert.Equal((HttpStatusCode.OK, false), await TryAsync("breaks"));
        Assert.Equal((HttpStatusCode.NotFound, null), await TryAsync("nobody"));

        async Task<(HttpStatusCode Status, bool? Ok)> TryAsync(string route)
        {
            using var answer = await page.Client.PostAsJsonAsync(new Uri($"/api/watcher/routes/{route}/test", UriKind.Relative), new { }, Token);
            return (answer.StatusCode, (await answer.Content.ReadFromJsonAsync<JsonElement>(Token)).TryGetProperty("ok", out var ok) ? ok.GetBoolean() : null);
        }
    }
}
