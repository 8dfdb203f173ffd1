using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Tests.Alerting.Routes;

/// <summary>Against a real broker, seen through a foreign subscriber.</summary>
public sealed class MqttRouteTests : IDisposable
{
    private readonly Broker _broker = new();

    public void Dispose() => _broker.Dispose();

    private static CancellationToken Token => TestContext.Current.CancellationToken;

    private MqttRoute Make() => new("mqtt", new MqttOptions { Host = "127.0.0.1", Port = _broker.Port, Topic = "shop/one" }, null, "shop-1", TimeProvider.System);

    [Fact]
    public async Task TellAsync_ARaisedAlert_IsSeenAtOnceAndByWhoeverComesLater()
    {
        await _broker.StartAsync();
        await using var route = Make();
        await route.WaitForConnectionAsync(TimeSpan.FromSeconds(10), Token);
        using var early = _broker.Subscribe("shop/one/#");
        await early.UntilAsync(line => line == "shop/one/status online");
        await route.TellAsync(Told.Change(), Token);
        await early.UntilAsync(line => line.StartsWith("shop/one/changes {", StringComparison.Ordinal) && line.Contains("\"cause\":\"hard-short\"", StringComparison.Ordinal));
        using var late = _broker.Subscribe("shop/one/bench/+");
        await late.UntilAsync(line => line.StartsWith("shop/one/bench/bay-3 {\"bench\":\"bay-3\",\"worst\":\"critical\",\"unacknowledged\":1", StringComparison.Ordinal));
    }

    [Fact]
    public async Task TellAsync_AnAlertDoneWith_LeavesTheBenchQuiet()
    {
        await _broker.StartAsync();
        await using var route = Make();
        await route.WaitForConnectionAsync(TimeSpan.FromSeconds(10), Token);
        await route.TellAsync(Told.Change(), Token);
        await route.TellAsync(Told.Change(what: AlertSteps.Reset, state: AlertState.Normal), Token);
        using var late = _broker.Subscribe("shop/one/bench/+");
        await late.UntilAsync(line => line.EndsWith("{\"bench\":\"bay-3\",\"worst\":\"quiet\",\"unacknowledged\":0,\"alerts\":[]}", StringComparison.Ordinal));
    }

    [Fact]
    public async Task TellAsync_WhileTheBrokerIsDown_FailsAndTheStateIsRestatedAfterwards()
    {
        await _broker.StartAsync();
        await using var route = Make();
        await route.WaitForConnectionAsync(TimeSpan.FromSeconds(10), Token);
        _broker.Kill();
        await Patience.UntilAsync(() => Failing(route));
        // A new broker that remembers nothing.
        await _broker.StartAsync();
        using var late = _broker.Subscribe("shop/one/bench/+");
        await late.UntilAsync(line => line.Contains("\"worst\":\"critical\"", StringComparison.Ordinal));
    }

    [Fact]
    public async Task DisposeAsync_AnOrderlyEnd_SaysStoppedAndNotOffline()
    {
        await _broker.StartAsync();
        var route = Make();
        await route.WaitForConnectionAsync(TimeSpan.FromSeconds(10), Token);
        using var watcher = _broker.Subscribe("shop/one/status");
        await watcher.UntilAsync(line => line.EndsWith("online", StringComparison.Ordinal));
        await route.DisposeAsync();
        await watcher.UntilAsync(line => line.EndsWith("stopped", StringComparison.Ordinal));
        await Patience.SettleAsync();
        Assert.DoesNotContain(watcher.Lines, line => line.EndsWith("offline", StringComparison.Ordinal));
    }

    [Fact]
    public async Task DisposeAsync_WithoutABroker_Ends()
    {
        var route = Make();
        await Assert.ThrowsAsync<RouteException>(() => route.TellAsync(Told.Change(severity: Severity.Warning), Token));
        await route.DisposeAsync().AsTask().WaitAsync(TimeSpan.FromSeconds(20), Token);
    }

    private static bool Failing(MqttRoute route)
    {
        try
        {
            return !route.TellAsync(Told.Change(), Token).Wait(TimeSpan.FromSeconds(1), Token);
        }
        catch (AggregateException error) when (error.InnerException is RouteException)
        {
            return true;
        }
    }
}
