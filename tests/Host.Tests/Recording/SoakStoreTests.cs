using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Recording;

public sealed class SoakStoreTests : IDisposable
{
    private static readonly StoreOptions SmallChunks = new() { ChunkReadings = 64 };

    private readonly TempFolder _folder = new();
    private readonly FakeTimeProvider _time = new(new DateTimeOffset(2026, 4, 2, 8, 0, 0, TimeSpan.Zero));

    public void Dispose() => _folder.Dispose();

    internal static RunStart Start(string bench = "by-the-window") => new()
    {
        Bench = bench,
        Unit = "rectifier 45 W 470 uF",
        Bank = "75 W || 25 W",
        Mains = "120 V 60 Hz",
        PlannedHours = 12,
        ConfigurationJson = """{"name":"by-the-window"}""",
        PredictionJson = """{"contrast":2.1}""",
        Software = "0.1.0",
    };

    [Fact]
    public async Task Run_WithEverything_ComesBackWhole()
    {
        using var store = Open();
        var run = await store.BeginRunAsync(Start());
        var readings = Enumerable.Range(0, 300).Select(i => new LineReading(i * 0.5, 0.4 + (i % 5 * 0.001), 3, 119.5, 1)).ToList();
        readings.ForEach(reading => Assert.True(run.Append(reading)));
        run.AppendMissed(151, "no-answer", "nothing in 1 s");
        run.AppendMissed(152, "no-answer");
        run.Append(new LineReading(152.5, double.PositiveInfinity));
        var finding = new Finding(1, Signature.DevelopingShort, Severity.Warning, 140, 149, null, "It creeps.", new Dictionary<string, double> { ["riseAmps"] = 0.02, ["untilHours"] = double.NaN });
        run.AppendFinding(149, new FindingChange(ChangeKind.Raised, finding));
        var alert = new StoredAlertChange(149, _time.GetUtcNow(), "by-the-window/1", "raised", "unacknowledged", Text: "It creeps.");
        run.AppendAlert(alert);
        Assert.True(await run.EndAsync(new RunEnd(Verdict.Failed, ["a developing short"], """{"meanAmps":0.402}""")));
        await store.AddNoteAsync(run.Run, "smelt warm", "Ada");
        await store.AttachAsync(run.Run, "cap.jpg", "image/jpeg", [1, 2, 3]);

        var record = store.Run(run.Run);
        Assert.Equal("20260402-001", record.Info.Run);
        Assert.Equal(Verdict.Failed, record.Info.Verdict);
        Assert.Equal(301, record.Info.Readings);
        Assert.Equal(152.5, record.Info.LengthSeconds);
        Assert.Equal(_time.GetUtcNow().AddSeconds(152.5), record.Info.EndedUtc);
        Assert.Equal(["a developing short"], record.Reasons);
        Assert.Equal(new StoredGap(149.5, 152.5, "no-answer", "nothing in 1 s", 2), Assert.Single(record.Gaps));
        Assert.Equivalent(finding, Assert.Single(record.Findings), strict: true);
        Assert.Equal(alert, Assert.Single(record.AlertChanges));
        Assert.Equal("smelt warm", Assert.Single(record.Notes).Text);
        Assert.Equal([1, 2, 3], store.Attachment(run.Run, Assert.Single(record.Attachments).Name));
        var stream = store.Readings(run.Run).ToList();
        Assert.Equal(readings, stream.Take(300));
        Assert.Equal([true, true, false], stream.Skip(300).Select(reading => reading.IsMissing));
    }

    [Fact]
    public async Task Readings_InManySmallCommits_AreOneStream()
    {
        using var store = Open();
        var run = await store.BeginRunAsync(Start());
        var readings = Enumerable.Range(0, 200).Select(i => new LineReading(i * 0.1, i * 0.001, 3)).ToList();
        foreach (var some in readings.Chunk(7))
        {
            some.ToList().ForEach(reading => run.Append(reading));
            Assert.True(await run.FlushAsync());
            Assert.Equal(some[^1], store.Readings(run.Run).Last());
        }

        Assert.Equal(readings, store.Readings(run.Run));
        Assert.Equal(readings.Where(reading => reading.Seconds is >= 3 and <= 9.05), store.Readings(run.Run, 3, 9.05));
    }

    [Fact]
    public async Task Open_AfterARunWithoutEnd_ClosesItAsIncomplete()
    {
        string id;
        using (var store = Open())
        {
            var run = await store.BeginRunAsync(Start());
            id = run.Run;
            Enumerable.Range(0, 100).ToList().ForEach(i => run.Append(new LineReading(i, 0.4, 1)));
        }

        using var again = Open();
        var closed = Assert.Single(again.Interrupted);
        Assert.Equal((id, Verdict.Incomplete, 100, 99.0), (closed.Run, closed.Verdict, closed.Readings, closed.LengthSeconds));
        Assert.Equal([SoakStore.InterruptedReason], again.Run(id).Reasons);
        Assert.Null(again.TakeInterrupted(Start("another-bench")));
        var resumed = await again.BeginRunAsync(Start() with { ResumedFrom = again.TakeInterrupted(Start()) });
        Assert.Equal(id, again.Run(resumed.Run).Info.ResumedFrom);
        Assert.NotEqual(id, resumed.Run);
        Assert.Null(again.TakeInterrupted(Start()));
    }

    [Fact]
    public async Task Runs_Filtered_AreThoseAskedFor()
    {
        using var store = Open();
        var first = await store.BeginRunAsync(Start("left"));
        await first.EndAsync(new RunEnd(Verdict.Passed, []));
        _time.Advance(TimeSpan.FromDays(1));
        var second = await store.BeginRunAsync(Start("right") with { UnitLabel = "job 1207" });
        Assert.Equal([second.Run, first.Run], store.Runs().Select(run => run.Run));
        Assert.Equal([first.Run], store.Runs(new RunFilter(Bench: "left")).Select(run => run.Run));
        Assert.Equal([second.Run], store.Runs(new RunFilter(Unit: "JOB")).Select(run => run.Run));
        Assert.Equal([first.Run], store.Runs(new RunFilter(Verdict: Verdict.Passed)).Select(run => run.Run));
        Assert.Equal([second.Run], store.Runs(new RunFilter(FromUtc: _time.GetUtcNow().AddHours(-1))).Select(run => run.Run));
    }

    [Fact]
    public void Open_FolderInUse_SaysSo()
    {
        using var store = Open();
        var refused = Assert.Throws<StoreException>(() => Open());
        Assert.Contains("Another program is recording", refused.Message, StringComparison.Ordinal);
        using var beside = SoakStore.Open(_folder.Path, _time, StoreMode.Review);
        Assert.Empty(beside.Runs());
    }

    [Fact]
    public void Run_Unknown_NamesTheFileAndTheNextStep()
    {
        using var store = Open();
        var refused = Assert.Throws<StoreException>(() => store.Run("20200101-001"));
        Assert.Contains("'lampwarden runs'", refused.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Health_AfterTraffic_Balances()
    {
        using var store = Open();
        var run = await store.BeginRunAsync(Start());
        Enumerable.Range(0, 1000).ToList().ForEach(i => run.Append(new LineReading(i, 0.4, 1)));
        Assert.True(await run.FlushAsync());
        var health = store.Health;
        Assert.Equal(health.Accepted, health.Stored + health.Waiting);
        Assert.Equal((0, 0, null), (health.Waiting, health.Refused, health.Trouble));
    }

    [Fact]
    public async Task AddNote_ThatBreaksARule_IsRefusedAloneAndHoldsUpNothing()
    {
        using var store = Open();
        var run = await store.BeginRunAsync(Start());
        run.Append(new LineReading(1, 0.4, 1));
        await Assert.ThrowsAsync<StoreException>(() => store.AddNoteAsync(run.Run, null!));
        Assert.True(await run.FlushAsync());
        Assert.Single(store.Readings(run.Run));
        var health = store.Health;
        Assert.Equal((1, null), (health.Refused, health.Trouble));
        Assert.Equal(health.Accepted, health.Stored + health.Waiting);
    }

    private SoakStore Open() => SoakStore.Open(_folder.Path, _time, StoreMode.Recording, SmallChunks);
}
