using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.CutOff;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Tests.Alerting.Routes;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Alerting.CutOff;

public sealed class CutOffUnitTests : IAsyncDisposable
{
    private readonly FakeTimeProvider _time = new(Told.Utc);
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lw-cut-off-");
    private readonly FakeContactor _contactor = new();
    private readonly List<string> _raised = [];
    private double? _silentSeconds = 0.1;

    public async ValueTask DisposeAsync()
    {
        await _contactor.DisposeAsync();
        _folder.Delete(recursive: true);
    }

    private static CutOffOptions Options(double onDelay = 0, bool dry = false)
    {
        var options = new CutOffOptions { OnDelaySeconds = onDelay, DryRun = dry };
        options.Trips.Add("hard-short");
        return options;
    }

    private static CutOffOutputOptions Wire(string? keepAlive = null) =>
        new() { Bench = "bay-3", OpenText = "OPEN\\n", KeepAliveText = keepAlive, KeepAliveSeconds = 1, LapseSeconds = 60 };

    private CutOffUnit Make(CutOffOptions? options = null, CutOffOutputOptions? wire = null) => new(
        options ?? Options(), wire ?? Wire(), _contactor, new CutOffFile(_folder.FullName, "bay-3"),
        new CutOffSurroundings(() => _silentSeconds, 30, (cause, severity, text) => Note($"{cause} {severity.Text()} {text}"), (cause, _) => Note($"clear {cause}")), _time, NullLogger.Instance);

    private void Note(string what)
    {
        lock (_raised)
        {
            _raised.Add(what);
        }
    }

    private static FindingChange Short(ChangeKind kind = ChangeKind.Raised, Severity severity = Severity.Critical) =>
        new(kind, new Finding(1, Signature.HardShort, severity, 10, 11, null, "It is a short.", new Dictionary<string, double> { ["lineAmps"] = 0.61 }));

    private string Record => File.ReadAllText(Path.Combine(_folder.FullName, "cut-off", "record.jsonl"));

    [Fact]
    public async Task Take_AFindingThatTrips_OpensWithItsEvidenceOnRecord()
    {
        await using var unit = Make();
        unit.Take(Short());
        await Patience.UntilAsync(() => _contactor.Sent.Count == 1);
        Assert.Equal("OPEN\n", _contactor.Sent[0]);
        Assert.Equal(CutOffPosition.Tripped, unit.State.Position);
        Assert.Contains("\"lineAmps\":0.61", Record, StringComparison.Ordinal);
        Assert.StartsWith("cut-off critical 'bay-3' is being cut off: hard-short.", Assert.Single(_raised), StringComparison.Ordinal);
        Assert.Contains("no protective device", _raised[0], StringComparison.Ordinal);
    }

    [Fact]
    public async Task Take_AnotherSignatureOrAWarning_DoesNotTrip()
    {
        await using var unit = Make();
        unit.Take(AlertBookTests.Change(ChangeKind.Raised, 2, Signature.OpenCircuit, Severity.Critical));
        unit.Take(Short(severity: Severity.Warning));
        await Patience.SettleAsync();
        _time.Advance(TimeSpan.FromMinutes(5));
        await Patience.SettleAsync();
        Assert.Empty(_contactor.Sent);
        Assert.Equal(CutOffPosition.Armed, unit.State.Position);
    }

    [Fact]
    public async Task Take_WithAnOnDelay_TripsOnlyWhatStandsThatLong()
    {
        await using var unit = Make(Options(onDelay: 10));
        unit.Take(Short());
        await Patience.SettleAsync();
        _time.Advance(TimeSpan.FromSeconds(9));
        await Patience.SettleAsync();
        unit.Take(Short(ChangeKind.Cleared));
        _time.Advance(TimeSpan.FromSeconds(60));
        await Patience.SettleAsync();
        Assert.Empty(_contactor.Sent);
        unit.Take(Short());
        await Patience.SettleAsync();
        _time.Advance(TimeSpan.FromSeconds(10.1));
        await Patience.UntilAsync(() => _contactor.Sent.Count == 1);
    }

    [Fact]
    public async Task Take_ADryRun_RecordsAndTellsButSendsNothing()
    {
        await using var unit = Make(Options(dry: true));
        unit.Take(Short());
        await Patience.UntilAsync(() => unit.State.Position == CutOffPosition.Tripped);
        await Patience.SettleAsync();
        Assert.Empty(_contactor.Sent);
        Assert.Contains("would trip", Record, StringComparison.Ordinal);
        Assert.Contains("dry run", _raised[0], StringComparison.Ordinal);
    }

    [Fact]
    public async Task Take_AContactorThatDoesNotAnswer_IsTriedUntilItDoes()
    {
        _contactor.Dead = true;
        await using var unit = Make();
        unit.Take(Short());
        await Patience.UntilAsync(() => _contactor.Attempts >= 5, _time);
        Assert.Contains(_raised, what => what.StartsWith("cut-off-down critical", StringComparison.Ordinal));
        _contactor.Dead = false;
        await Patience.UntilAsync(() => _contactor.Sent.Count == 1, _time);
        await Patience.UntilAsync(() => _raised.Contains("clear cut-off-down"));
    }

    [Fact]
    public async Task Reset_IsForAPersonAndRefusedWhileTheFindingStands()
    {
        await using var unit = Make();
        unit.Take(Short());
        await Patience.UntilAsync(() => unit.State.Position == CutOffPosition.Tripped);
        Assert.Contains("still stands", unit.Reset("Kim"), StringComparison.Ordinal);
        unit.Take(Short(ChangeKind.Cleared));
        await Patience.SettleAsync();
        Assert.Equal(CutOffPosition.Tripped, unit.State.Position);
        Assert.Null(unit.Reset("Kim"));
        Assert.Equal((CutOffPosition.Armed, "reset by Kim"), (unit.State.Position, unit.State.Why));
    }

    [Fact]
    public async Task Restart_AfterATrip_StaysTrippedAndOpensOnceMore()
    {
        await using (var unit = Make())
        {
            unit.Take(Short());
            await Patience.UntilAsync(() => _contactor.Sent.Count == 1);
        }

        await using var again = Make();
        await Patience.UntilAsync(() => _contactor.Sent.Count == 2);
        Assert.Equal(CutOffPosition.Tripped, again.State.Position);
    }

    [Fact]
    public async Task Restart_WithAnUnreadableState_CountsAsTripped()
    {
        Directory.CreateDirectory(Path.Combine(_folder.FullName, "cut-off"));
        await File.WriteAllTextAsync(Path.Combine(_folder.FullName, "cut-off", "bay-3.json"), "{ \"posit", TestContext.Current.CancellationToken);
        await using var unit = Make();
        Assert.Equal(CutOffPosition.Tripped, unit.State.Position);
    }

    [Fact]
    public async Task KeepAlive_FirstStart_WaitsForAPerson()
    {
        await using var unit = Make(wire: Wire("HOLD\\n"));
        await Patience.UntilAsync(() => unit.State.Position == CutOffPosition.Lapsed);
        Assert.Null(unit.Reset("Kim"));
        await Patience.UntilAsync(() => _contactor.Sent.Count >= 3, _time, 0.5);
        Assert.All(_contactor.Sent, text => Assert.Equal("HOLD\n", text));
    }

    [Fact]
    public async Task KeepAlive_ATrip_StopsItForGood()
    {
        await using var unit = Make(wire: Wire("HOLD\\n"));
        unit.Reset("Kim");
        await Patience.UntilAsync(() => _contactor.Sent.Count >= 2, _time, 0.5);
        unit.Take(Short());
        await Patience.UntilAsync(() => _contactor.Sent.Contains("OPEN\n"));
        var count = _contactor.Sent.Count;
        for (var second = 0; second < 20; second++)
        {
            _time.Advance(TimeSpan.FromSeconds(1));
            await Task.Delay(3, TestContext.Current.CancellationToken);
        }

        Assert.Equal(count, _contactor.Sent.Count);
    }

    [Fact]
    public async Task KeepAlive_ALoopThatHandlesNoReadings_IsNotHeldClosed()
    {
        await using var unit = Make(wire: Wire("HOLD\\n"));
        unit.Reset("Kim");
        await Patience.UntilAsync(() => _contactor.Sent.Count >= 2, _time, 0.5);
        _silentSeconds = 31;
        await Patience.SettleAsync();
        var count = _contactor.Sent.Count;
        await Patience.UntilAsync(() => unit.State.Position == CutOffPosition.Lapsed, _time, 0.5);
        Assert.InRange(_contactor.Sent.Count, count, count + 1);
        // Readings are handled again, but a contactor never closes by itself.
        _silentSeconds = 0.1;
        await Patience.SettleAsync();
        _time.Advance(TimeSpan.FromSeconds(10));
        await Patience.SettleAsync();
        Assert.InRange(_contactor.Sent.Count, count, count + 1);
    }

    [Theory]
    [InlineData(50, CutOffPosition.Armed)]
    [InlineData(61, CutOffPosition.Lapsed)]
    [InlineData(-60, CutOffPosition.Lapsed)]
    public async Task KeepAlive_ARestart_GoesOnOnlyWhereTheContactorCannotHaveOpened(double downSeconds, CutOffPosition after)
    {
        await using (var unit = Make(wire: Wire("HOLD\\n")))
        {
            unit.Reset("Kim");
            await Patience.UntilAsync(() => _contactor.Sent.Count >= 2, _time, 0.5);
            await Patience.UntilAsync(() => unit.State.LastKeepAliveUtc is not null);
        }

        var last = new CutOffFile(_folder.FullName, "bay-3").Load()!.LastKeepAliveUtc!.Value;
        var later = new FakeTimeProvider(last + TimeSpan.FromSeconds(downSeconds));
        await using var again = new CutOffUnit(
            Options(), Wire("HOLD\\n"), _contactor, new CutOffFile(_folder.FullName, "bay-3"),
            new CutOffSurroundings(() => 0.1, 30, (_, _, _) => { }, (_, _) => { }), later, NullLogger.Instance);
        Assert.Equal(after, again.State.Position);
    }

    [Fact]
    public async Task ResetWish_LaidBesideTheState_IsCarriedOutAndGone()
    {
        await using var unit = Make();
        unit.Take(Short());
        await Patience.UntilAsync(() => unit.State.Position == CutOffPosition.Tripped);
        unit.Take(Short(ChangeKind.Cleared));
        var file = new CutOffFile(_folder.FullName, "bay-3");
        file.Wish("Kim");
        await Patience.UntilAsync(() => !File.Exists(file.ResetPath), _time);
        Assert.Equal("reset by Kim", file.Load()!.Why);
    }

    private sealed class FakeContactor : ICutOffOutput
    {
        private readonly Lock _gate = new();
        private readonly List<string> _sent = [];

        public string Place => "the test's contactor";

        public bool Dead { get; set; }

        public int Attempts { get; private set; }

        public IReadOnlyList<string> Sent
        {
            get
            {
                lock (_gate)
                {
                    return [.. _sent];
                }
            }
        }

        public Task SendAsync(string text, string? answer, CancellationToken cancellation)
        {
            lock (_gate)
            {
                Attempts++;
                if (Dead)
                {
                    throw new IOException("no answer");
                }

                _sent.Add(text);
                return Task.CompletedTask;
            }
        }

        public ValueTask DisposeAsync() => ValueTask.CompletedTask;
    }
}
