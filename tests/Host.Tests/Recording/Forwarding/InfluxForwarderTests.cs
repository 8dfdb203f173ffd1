using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Forwarding;

namespace Lampwarden.Host.Tests.Recording.Forwarding;

/// <summary>Against real servers on loopback: VictoriaMetrics for the v2 path, InfluxDB 1.x for strictness and full precision.</summary>
public sealed class InfluxForwarderTests : IDisposable
{
    private static readonly DateTimeOffset Began = new(2026, 4, 2, 8, 0, 0, TimeSpan.Zero);

    private readonly TempFolder _folder = new();
    private readonly string _tokenFile;

    public InfluxForwarderTests()
    {
        _tokenFile = Path.Combine(_folder.Path, "token");
        File.WriteAllText(_tokenFile, InfluxServer.Token + "\n");
    }

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Forward_ToTheV2Path_GivesBackWhatIsStored()
    {
        using var server = new VictoriaServer();
        await server.StartAsync();
        using var store = Open();
        var run = await RecordAsync(store, 12_000);
        using var forwarder = new InfluxForwarder(store, new InfluxOptions { Url = server.Url, Org = "shop", Bucket = "soaks" }, TimeProvider.System);
        await SendAllAsync(forwarder);
        Assert.Equal(Stored(store, run, reading => reading.Amps), await server.ReadAsync("soak_reading_amps", run));
        Assert.Equal(Stored(store, run, reading => reading.MainsVolts), await server.ReadAsync("soak_reading_volts", run));
        Assert.Equal(12_000.0, Assert.Single(await server.ReadAsync("soak_run_readings", run)).Value);
    }

    [Fact]
    public async Task Forward_ServerAwayKilledAndBack_LosesAndDoublesNothing()
    {
        using var server = new InfluxServer();
        await server.PrepareAsync();
        using var store = Open();
        var run = await RecordAsync(store, 60_000);
        server.Kill();

        using (var forwarder = new InfluxForwarder(store, Options(server), TimeProvider.System))
        {
            Assert.Equal(SendResult.Later, (await forwarder.RoundAsync(CancellationToken.None)).Outcome.Result);
            Assert.NotNull(forwarder.Health.Trouble);
            await server.StartAsync();
            await forwarder.RoundAsync(CancellationToken.None);

            // Killed in the midst of a write, somewhere between the first and the last batch.
            var sending = SendAllAsync(forwarder, tolerant: true);
            await Task.Delay(120);
            server.Kill();
            await sending;
        }

        await server.StartAsync();
        using (var restarted = new InfluxForwarder(store, Options(server), TimeProvider.System))
        {
            await SendAllAsync(restarted);
        }

        Assert.Equal(Stored(store, run, reading => reading.Amps), await server.ReadAsync("amps", "soak_reading", run));
    }

    [Fact]
    public async Task Forward_WrongToken_HaltsSaysSoAndLosesNothing()
    {
        using var server = new InfluxServer();
        await server.PrepareAsync();
        using var store = Open();
        var run = await RecordAsync(store, 500);
        await File.WriteAllTextAsync(_tokenFile, "shop:wrong-password");
        using (var forwarder = new InfluxForwarder(store, Options(server), TimeProvider.System))
        {
            // Ends by itself: what cannot succeed is not tried for ever.
            await forwarder.RunAsync(CancellationToken.None);
            Assert.True(forwarder.Health.Halted);
            Assert.Contains("check the token", forwarder.Health.Trouble, StringComparison.Ordinal);
            Assert.DoesNotContain("wrong-password", forwarder.Health.Trouble, StringComparison.Ordinal);
        }

        Assert.Empty(store.ParkedPoints());
        await File.WriteAllTextAsync(_tokenFile, InfluxServer.Token);
        using var mended = new InfluxForwarder(store, Options(server), TimeProvider.System);
        await SendAllAsync(mended);
        Assert.Equal(500, (await server.ReadAsync("amps", "soak_reading", run)).Count);
    }

    [Fact]
    public async Task Forward_PointsTheServerRefuses_AreParkedAndTheRestGoesThrough()
    {
        using var server = new InfluxServer();
        await server.PrepareAsync();
        using var store = Open();
        var run = await RecordAsync(store, 3_000, missedAt: 1_234);
        // Somebody's own point has made 'missed' a text in this database: ours, a boolean, is refused from now on.
        await server.WriteAsync($"soak_reading,bench=x missed=\"yes\" {Began.ToUnixTimeMilliseconds()}");
        using var forwarder = new InfluxForwarder(store, Options(server), TimeProvider.System);
        await SendAllAsync(forwarder);
        Assert.Equal(3_000, (await server.ReadAsync("amps", "soak_reading", run)).Count);
        var parked = Assert.Single(store.ParkedPoints());
        Assert.Contains("field type conflict", parked.Reason, StringComparison.Ordinal);
        Assert.Contains("missed=true", parked.Line, StringComparison.Ordinal);
        Assert.Equal(1, forwarder.Health.Parked);
    }

    [Fact]
    public async Task Forward_RunStillGoingOn_FollowsIt()
    {
        using var server = new InfluxServer();
        await server.PrepareAsync();
        using var store = Open();
        var run = await store.BeginRunAsync(SoakStoreTests.Start() with { StartedUtc = Began });
        using var forwarder = new InfluxForwarder(store, Options(server), TimeProvider.System);
        for (var i = 0; i < 300; i++)
        {
            run.Append(new LineReading(i, 0.4 + (i * 0.0001), 4));
            if (i % 100 == 99)
            {
                await run.FlushAsync();
                await SendAllAsync(forwarder);
                Assert.Equal(i + 1, (await server.ReadAsync("amps", "soak_reading", run.Run)).Count);
            }
        }

        await run.EndAsync(new RunEnd(Verdict.Passed, ["All well."]));
        await SendAllAsync(forwarder);
        Assert.Contains("\"passed\"", await server.QueryAsync($"SELECT verdict FROM soak_run WHERE run='{run.Run}'"), StringComparison.Ordinal);
        Assert.Empty(store.Outbox("v1 " + server.Url + "/ /" + InfluxServer.Database));
    }

    [Fact]
    public void Points_AwkwardNames_AreEscapedAsTheProtocolAsks()
    {
        var run = new OutboxRun(1, "20260402-001", InfluxPoints.Tag("amp 7, left=\\"), 0, false, default);
        const string head = "soak_reading,bench=amp\\ 7\\,\\ left\\=,run=20260402-001";
        Assert.Equal(head, InfluxPoints.ReadingHead(run));
        Assert.Equal(head + " amps=0.4123 2500", InfluxPoints.Reading(head, 1000, new LineReading(1.5, 0.4123, 4)));
        Assert.Equal(head + " overload=true,volts=119.5 2500", InfluxPoints.Reading(head, 1000, new LineReading(1.5, double.PositiveInfinity, 0, 119.5, 1)));
        Assert.Equal(head + " missed=true 2500", InfluxPoints.Reading(head, 1000, new LineReading(1.5, double.NaN)));
    }

    private SoakStore Open() => SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Recording, new StoreOptions { ChunkReadings = 4096 });

    private InfluxOptions Options(InfluxServer server) => new() { Url = server.Url, Bucket = InfluxServer.Database, Api = "v1", TokenFile = _tokenFile };

    private static async Task<string> RecordAsync(SoakStore store, int count, int missedAt = -1)
    {
        var run = await store.BeginRunAsync(SoakStoreTests.Start() with { StartedUtc = Began });
        var random = new Random(count);
        for (var i = 0; i < count; i++)
        {
            if (i == missedAt)
            {
                run.AppendMissed((i * 0.1) - 0.05, "no-answer");
            }

            while (!run.Append(new LineReading(i * 0.1, Math.Round(0.41 + (random.NextDouble() * 0.01), 6), 6, 120, 1)))
            {
                await run.FlushAsync();
            }
        }

        run.AppendAlert(new StoredAlertChange(5, Began.AddSeconds(5), "1", "raised", "unacknowledged"));
        Assert.True(await run.EndAsync(new RunEnd(Verdict.Passed, ["All well."])));
        return run.Run;
    }

    private static SortedDictionary<long, double> Stored(SoakStore store, string run, Func<LineReading, double> value) => new(store.Readings(run)
        .Where(reading => double.IsFinite(value(reading)))
        .ToDictionary(reading => Began.ToUnixTimeMilliseconds() + reading.Milliseconds, value));

    private static async Task SendAllAsync(InfluxForwarder forwarder, bool tolerant = false)
    {
        while (true)
        {
            var (more, outcome) = await forwarder.RoundAsync(CancellationToken.None);
            if (outcome.Result != SendResult.Sent && tolerant)
            {
                return;
            }

            Assert.Equal((SendResult.Sent, null), (outcome.Result, outcome.Why));
            if (!more)
            {
                return;
            }
        }
    }
}
