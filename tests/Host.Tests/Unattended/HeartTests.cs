using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Alerting;
using Lampwarden.Host.Tests.Alerting.Routes;
using Lampwarden.Host.Unattended;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Unattended;

/// <summary>The watchdog is fed while readings are handled, and only then.</summary>
public sealed class HeartTests : IAsyncDisposable
{
    private readonly FakeTimeProvider _time = new(Told.Utc);
    private readonly NotifySocket _socket = new();
    private readonly AlertDispatch _dispatch;
    private readonly Pulse _pulse;
    private readonly List<string> _ends = [];

    public HeartTests()
    {
        Outside.Need(!OperatingSystem.IsWindows(), "there are no datagram sockets with paths");
        _dispatch = new AlertDispatch(new AlertRules(), null, _time, NullLogger.Instance);
        _pulse = new Pulse(["bay-1", "bay-2"], _time);
        _pulse.Expect();
    }

    public async ValueTask DisposeAsync()
    {
        _socket.Dispose();
        await _dispatch.DisposeAsync();
    }

    private ServiceManager Manager() => new(name => name switch { "NOTIFY_SOCKET" => _socket.Path, "WATCHDOG_USEC" => "9000000", _ => null });

    private Heart Beat(ServiceManager manager, UnattendedOptions? options = null) =>
        new(options ?? new UnattendedOptions(), _pulse, _dispatch, manager, _time, NullLogger.Instance, reason =>
        {
            lock (_ends)
            {
                _ends.Add(reason);
            }
        });

    private void Handle(string bench) => _pulse.Hear(new Observed(bench, new Observation(1, 0.4), default, () => ""));

    [Fact]
    public async Task Beat_WhileReadingsAreHandled_FeedsThreeTimesWithinTheManagersPatience()
    {
        using var manager = Manager();
        await using var heart = Beat(manager);
        await Patience.UntilAsync(() => _socket.Feeds == 1);
        for (var second = 1; second <= 90; second++)
        {
            _time.Advance(TimeSpan.FromSeconds(1));
            Handle("bay-1");
            Handle("bay-2");
            await Task.Delay(3, TestContext.Current.CancellationToken);
            _ = _socket.Feeds;
        }

        await Patience.UntilAsync(() => _socket.Feeds >= 28);
        Assert.InRange(_socket.Feeds, 28, 31);
        Assert.Empty(_ends);
    }

    [Fact]
    public void Stuck_WhileTheServiceIsStillStarting_NoBench()
    {
        var starting = new Pulse(["bay-1"], _time);
        _time.Advance(TimeSpan.FromMinutes(5));
        Assert.Empty(starting.Stuck(30));
        starting.Expect();
        _time.Advance(TimeSpan.FromSeconds(31));
        Assert.Equal(["bay-1"], starting.Stuck(30));
    }

    [Fact]
    public async Task Beat_OneLoopStuck_StopsFeedingTellsAndEndsTheProcess()
    {
        using var manager = Manager();
        await using var heart = Beat(manager);
        await Patience.UntilAsync(() => _socket.Feeds >= 0 && _dispatch.ServiceAlerts.Count == 1, AdvanceHandlingOneBench());
        Assert.Contains("bay-2", _dispatch.ServiceAlerts.First().Text, StringComparison.Ordinal);
        Assert.DoesNotContain("bay-1", _dispatch.ServiceAlerts.First().Text, StringComparison.Ordinal);
        Assert.Contains(_socket.Messages, message => message == "STATUS=stuck: bay-2");
        var feeds = _socket.Feeds;
        await Patience.UntilAsync(() => _ends.Count > 0, AdvanceHandlingOneBench());
        Assert.Equal(feeds, _socket.Feeds);
        Assert.Contains("bay-2", _ends[0], StringComparison.Ordinal);
    }

    [Fact]
    public async Task Beat_ALoopThatComesBackInTime_ClearsTheAlertAndFeedsAgain()
    {
        using var manager = Manager();
        await using var heart = Beat(manager, new UnattendedOptions { EndWhenStuck = false });
        await Patience.UntilAsync(() => _socket.Feeds >= 0 && _dispatch.ServiceAlerts.Count == 1, AdvanceHandlingOneBench());
        var feeds = _socket.Feeds;
        Handle("bay-1");
        Handle("bay-2");
        _time.Advance(TimeSpan.FromSeconds(5));
        await Patience.UntilAsync(() => _socket.Feeds > feeds);
        Assert.False(_dispatch.ServiceAlerts.First().Standing);
        Assert.Empty(_ends);
    }

    [Fact]
    public void Pulse_ABenchWhoseSoakIsOver_OwesNothing()
    {
        Handle("bay-1");
        _pulse.Hear(new RunEnded("bay-2", 10, new SoakDocument(0, [], [], Verdict.Passed, new Dictionary<string, object>()), default!));
        _time.Advance(TimeSpan.FromHours(1));
        Assert.Equal(["bay-1"], _pulse.Stuck(30));
        Assert.Null(_pulse.SecondsSince("bay-2"));
    }

    [Fact]
    public void ServiceManager_WithoutASocket_DoesNothing()
    {
        using var manager = new ServiceManager(_ => null);
        manager.Ready();
        manager.Feed();
        Assert.False(manager.IsThere);
        Assert.Null(manager.WatchdogTime);
    }

    [Fact]
    public void ServiceManager_AManagerThatDoesNotRead_HoldsNothingUp()
    {
        using var manager = Manager();
        for (var feed = 0; feed < 5000; feed++)
        {
            manager.Feed();
        }

        Assert.InRange(_socket.Feeds, 1, 4999);
    }

    [Fact]
    public void ServiceManager_AManagerThatWentAway_ThrowsNothing()
    {
        using var socket = new NotifySocket();
        using var manager = new ServiceManager(name => name == "NOTIFY_SOCKET" ? socket.Path : null);
        File.Delete(socket.Path);
        manager.Feed();
        Assert.Empty(socket.Messages);
    }

    [Theory]
    [InlineData("1", false)]
    [InlineData(null, true)]
    public void ServiceManager_AWatchdogForAnotherProcess_IsNotOurs(string? id, bool ours)
    {
        using var manager = new ServiceManager(name => name switch { "WATCHDOG_USEC" => "1000000", "WATCHDOG_PID" => id, _ => null });
        Assert.Equal(ours, manager.WatchdogTime is not null);
    }

    [Fact]
    public async Task Ping_OnlyWhileReadingsAreHandled()
    {
        await using var server = new RawHttpServer(RawHttpServer.Status("200 OK"));
        using var manager = new ServiceManager(_ => null);
        await using var heart = Beat(manager, new UnattendedOptions { PingUrl = server.Url.ToString(), PingSeconds = 10, EndWhenStuck = false });
        await Patience.UntilAsync(() => server.Requests.Count == 1);
        _time.Advance(TimeSpan.FromSeconds(10));
        await Patience.UntilAsync(() => server.Requests.Count == 2);
        _time.Advance(TimeSpan.FromSeconds(40));
        await Patience.SettleAsync();
        var before = server.Requests.Count;
        _time.Advance(TimeSpan.FromSeconds(60));
        await Patience.SettleAsync();
        Assert.Equal(before, server.Requests.Count);
        Assert.StartsWith("GET /hook", server.Requests[0].Head, StringComparison.Ordinal);
    }

    /// <summary>A clock whose every step brings a reading of bay-1, and none of bay-2.</summary>
    private FakeTimeProvider AdvanceHandlingOneBench()
    {
        Handle("bay-1");
        _ = KeepHandlingAsync();
        return _time;

        async Task KeepHandlingAsync()
        {
            for (var look = 0; look < 2000; look++)
            {
                Handle("bay-1");
                await Task.Delay(1);
            }
        }
    }
}
