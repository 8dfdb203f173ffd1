using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Web.Api;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Web;

public sealed class WatcherTests
{
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
}
