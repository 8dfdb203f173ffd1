using System.Text;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Alerting;
using Lampwarden.Host.Tests.Alerting.Routes;
using Lampwarden.Host.Tests.Recording;

namespace Lampwarden.Host.Tests.Unattended;

/// <summary>What the world sees of the process when it starts, is stopped, dies, and comes back.</summary>
public sealed class ServiceProcessTests : IDisposable
{
    private readonly TempFolder _folder = new();

    public ServiceProcessTests() => Outside.Need(!OperatingSystem.IsWindows(), "the process is ended by signals");

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Watch_KilledHard_TheBrokerItselfTellsAForeignSubscriber()
    {
        using var broker = new Broker();
        await broker.StartAsync();
        await using var rig = ServiceProcess.Rig();
        using var watcher = broker.Subscribe("shop/one/status");
        await using var service = await ServiceProcess.StartAsync(_folder, rig, $$"""
            , "alerts": { "routes": [ { "kind": "mqtt", "mqtt": { "host": "127.0.0.1", "port": {{broker.Port}}, "topic": "shop/one" } } ] }
            """);
        await watcher.UntilAsync(line => line == "shop/one/status online");
        await service.KillAsync();
        await watcher.UntilAsync(line => line == "shop/one/status offline");
    }

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public async Task Watch_StoppedOrKilledAndStartedAgain_CarriesTheRunOnWithAGapOnRecord(bool killed)
    {
        await using var rig = ServiceProcess.Rig();
        await using (var service = await ServiceProcess.StartAsync(_folder, rig))
        {
            await ServiceProcess.AskedAsync(rig, 25);
            await (killed ? service.KillAsync() : service.SignalAsync("TERM"));
        }

        var asked = rig.Asked;
        await using (var service = await ServiceProcess.StartAsync(_folder, rig, words: ["--no-page", "--resume"]))
        {
            await ServiceProcess.AskedAsync(rig, asked + 15);
            await service.SignalAsync("TERM");
        }

        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        var (second, first) = (store.Runs().OrderBy(run => run.Run, StringComparer.Ordinal).ToList() is [var a, var b] ? (b, a) : throw new InvalidOperationException("two runs were expected"));
        Assert.Equal(first.Run, second.ResumedFrom);
        Assert.Equal(first.StartedUtc, second.StartedUtc);
        var gap = Assert.Single(store.Run(second.Run).Gaps, gap => gap.Reason == SoakResumption.GapReason);
        Assert.True(gap.ToSeconds > first.LengthSeconds);
        var readings = store.Readings(second.Run).Where(reading => !reading.IsMissing).ToList();
        Assert.True(readings[0].Seconds >= gap.ToSeconds);
        // A short absence of the service is not a fault of the bench.
        Assert.DoesNotContain(store.Run(second.Run).Findings, finding => finding.Severity == Severity.Critical);
    }

    [Fact]
    public async Task Watch_StartedAgainWithoutResume_BeginsAnew()
    {
        await using var rig = ServiceProcess.Rig();
        for (var start = 1; start <= 2; start++)
        {
            var asked = rig.Asked;
            await using var service = await ServiceProcess.StartAsync(_folder, rig);
            await ServiceProcess.AskedAsync(rig, asked + 10);
            // On a busy computer the meter may have answered long before the run is begun.
            await Patience.UntilAsync(() => RunsOnRecord() == start, looks: 3000);
            await service.SignalAsync("TERM");
            Assert.Equal(130, service.ExitCode);
        }

        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        Assert.Equal(2, store.Runs().Select(run => run.StartedUtc).Distinct().Count());
    }

    [Fact]
    public async Task Watch_UnderAServiceManager_TellsItAndAnybodyWhoAsksHowItDoes()
    {
        var port = WebhookRouteTests.FreePort();
        using var socket = new NotifySocket();
        await using var rig = ServiceProcess.Rig();
        await using var service = await ServiceProcess.StartAsync(
            _folder, rig, $$""", "web": { "address": "http://127.0.0.1:{{port}}" } """, [], ("NOTIFY_SOCKET", socket.Path), ("WATCHDOG_USEC", "1500000"));
        await Patience.UntilAsync(() => socket.Messages.Contains("READY=1"), looks: 3000);
        Assert.Contains("STATUS=watching 1 bench", socket.Messages);
        await ServiceProcess.AskedAsync(rig, 15);
        using var client = new HttpClient { BaseAddress = new Uri($"http://127.0.0.1:{port}") };
        await CheckHealthAsync(client);

        // Settings are read again, and the run goes on.
        await service.SignalAsync("HUP", andWait: false);
        await Patience.UntilAsync(() => socket.Feeds >= 3, looks: 3000);
        await ServiceProcess.AskedAsync(rig, rig.Asked + 10);
        await service.SignalAsync("TERM");
        Assert.Contains("STOPPING=1", socket.Messages);
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        Assert.Single(store.Runs());
        var log = string.Concat(Directory.GetFiles(Path.Combine(_folder.Path, "log")).Select(File.ReadAllText));
        Assert.Contains("was read again", log, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Watch_WithALoopThatHangs_SaysSoEndsItselfAndIsTakenUpAgain()
    {
        await using var hook = new RawHttpServer(RawHttpServer.Status("204 No Content"));
        await using var rig = ServiceProcess.Rig();
        var more = $$""", "unattended": { "stuckAfterSeconds": 5 }, "alerts": { "routes": [ { "kind": "webhook", "webhook": { "url": "{{hook.Url}}" } } ] } """;
        await using (var hanging = await ServiceProcess.StartHangingAsync(_folder, rig, readings: 30, more))
        {
            await hanging.EndedAsync();
            Assert.NotEqual(0, hanging.ExitCode);
        }

        Assert.Contains(hook.Requests, request => Encoding.UTF8.GetString(request.Body).Contains("\"cause\":\"loop-stuck\"", StringComparison.Ordinal));

        // What a service manager does then.
        var asked = rig.Asked;
        await using var service = await ServiceProcess.StartAsync(_folder, rig, more, ["--no-page", "--resume"]);
        await ServiceProcess.AskedAsync(rig, asked + 20);
        await service.SignalAsync("TERM");
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        var runs = store.Runs().OrderBy(run => run.Run, StringComparer.Ordinal).ToList();
        Assert.Equal((2, runs[0].Run), (runs.Count, runs[1].ResumedFrom));
        Assert.Equal("service-down", store.Run(runs[1].Run).Gaps[0].Reason);
        Assert.InRange(runs[0].Readings, 25, 40);
    }

    [Fact]
    public async Task Watch_WithACollector_SendsItsFiguresOverOtlp()
    {
        await using var collector = new RawHttpServer(RawHttpServer.Status("200 OK"));
        await using var rig = ServiceProcess.Rig();
        await using var service = await ServiceProcess.StartAsync(_folder, rig, $$""", "unattended": { "otlpUrl": "{{collector.Url.GetLeftPart(UriPartial.Authority)}}" } """);
        await ServiceProcess.AskedAsync(rig, 15);
        await service.SignalAsync("TERM");

        // What has not been sent yet is sent at the end. Strings stand in the protobuf message as they are.
        var sent = collector.Requests[^1];
        Assert.StartsWith("POST /v1/metrics ", sent.Head, StringComparison.Ordinal);
        Assert.Equal("application/x-protobuf", sent.Header("Content-Type"));
        var text = Encoding.Latin1.GetString(sent.Body);
        Assert.All(["lampwarden.polls", "lampwarden.reading.handling", "lampwarden.store.accepted", "attic", "reading"], word => Assert.Contains(word, text, StringComparison.Ordinal));
    }

    private int RunsOnRecord()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        return store.Runs().Count;
    }

    private static async Task CheckHealthAsync(HttpClient client)
    {
        var health = JsonDocument.Parse(await client.GetStringAsync(new Uri("/health", UriKind.Relative), TestContext.Current.CancellationToken)).RootElement;
        Assert.Equal("ok", health.GetProperty("status").GetString());
        Assert.InRange(health.GetProperty("benches")[0].GetProperty("silentSeconds").GetDouble(), 0, 20);
        var store = health.GetProperty("store");
        Assert.Equal(store.GetProperty("accepted").GetInt64(), store.GetProperty("stored").GetInt64() + store.GetProperty("waiting").GetInt64());
        var watcher = JsonDocument.Parse(await client.GetStringAsync(new Uri("/api/watcher", UriKind.Relative), TestContext.Current.CancellationToken)).RootElement;
        Assert.Equal(("ok", health.GetProperty("instance").GetString()), (watcher.GetProperty("status").GetString(), watcher.GetProperty("instance").GetString()));
        var metrics = await client.GetStringAsync(new Uri("/metrics", UriKind.Relative), TestContext.Current.CancellationToken);
        Assert.Contains("lampwarden_polls_total{bench=\"attic\",result=\"reading\"}", metrics, StringComparison.Ordinal);
    }
}
