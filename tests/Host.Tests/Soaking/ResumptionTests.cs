using System.Collections.Concurrent;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Recording;
using Lampwarden.Host.Tests.Web.Support;
using Lampwarden.Simulator;
using Microsoft.Extensions.Logging.Abstractions;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>What a person told the watch, and what it found, outlive a restart of the service.</summary>
public sealed class ResumptionTests : IAsyncDisposable
{
    private readonly TempFolder _folder = new();
    private readonly RehearsalClock _clock = new(60);
    private readonly PlayedBench _bench;
    private readonly SoakStore _store;

    public ResumptionTests()
    {
        _bench = new PlayedBench(_clock);
        _store = SoakStore.Open(_folder.Path, _clock);
        _clock.Begin();
    }

    public async ValueTask DisposeAsync()
    {
        _store.Dispose();
        await _bench.DisposeAsync();
        _clock.Dispose();
        _folder.Dispose();
    }

    [Fact]
    public async Task Resume_AfterALoadChangeThatWasAnnounced_FindsNoFault()
    {
        var before = await SoakAsync("resistor 250 ohm", "100 W 120 V", bringUp: false, async desk =>
        {
            _bench.Amps = 0.4;
            await UntilAsync(desk, seconds => seconds > 90);
            Assert.True(await desk.Desk.Soak!.AnnounceAsync(new Announcement(AnnouncementKind.LoadChanged, "volume to half")));
            _bench.Amps = 0.55;
            await UntilAsync(desk, seconds => seconds > 240);
        });
        var after = await SoakAsync("resistor 250 ohm", "100 W 120 V", bringUp: false, desk => UntilAsync(desk, seconds => seconds > 400));

        Assert.Equal(before.Run, _store.Run(after.Run!).Info.ResumedFrom);
        Assert.DoesNotContain(before.Findings, finding => finding.Signature == Signature.HardShort);
        Assert.DoesNotContain(after.Findings, finding => finding.Signature == Signature.HardShort);
        var told = Assert.Single(_store.Run(before.Run!).Announcements);
        Assert.Equal(("load-changed", "volume to half"), (told.Kind, told.Detail));
    }

    [Fact]
    public async Task Resume_AfterAnAlarm_GoesOnWatchingTheFailedUnit()
    {
        var before = await SoakAsync("resistor 250 ohm", "100 W 120 V", bringUp: false, async desk =>
        {
            _bench.Amps = 0.4;
            await UntilAsync(desk, seconds => seconds > 90);
            _bench.Amps = 0.82;
            await UntilAsync(desk, _ => desk.Alerts.Any(change => change.Alert is { IsUnacknowledged: true, Severity: Severity.Critical }));
        });
        Assert.Equal(Verdict.Failed, before.Verdict);
        var after = await SoakAsync("resistor 250 ohm", "100 W 120 V", bringUp: false, async desk =>
        {
            // Page, routes and cut-off start with nothing: they must hear at once of what stands.
            await UntilAsync(desk, _ => desk.Findings.Contains(Signature.HardShort) && desk.Alerts.Any(change => change.What == AlertSteps.CarriedOn));
            await UntilAsync(desk, _ => desk.Alerts.Any(change => change.Alert.Repeats > 0));
        });

        Assert.Equal(before.Run, _store.Run(after.Run!).Info.ResumedFrom);
        Assert.Equal(Verdict.Failed, after.Verdict);
    }

    [Fact]
    public async Task Resume_InTheMiddleOfABringUp_TakesItUpAtTheSameStep()
    {
        const string bank = "25 W 120 V || 60 W 120 V || 100 W 120 V";
        var steps = new List<BringUpStep>();
        var before = await SoakAsync("resistor 450 ohm", bank, bringUp: true, async desk =>
        {
            steps.AddRange(desk.Desk.StepsOf(desk.Desk.Plan));
            _bench.Amps = steps[0].MiddleAmps;
            await UntilAsync(desk, _ => desk.BringUp?.State == "ready");
            _bench.Amps = steps[1].MiddleAmps;
            await UntilAsync(desk, _ => desk.BringUp is { At: 1, State: "ready" });
        });
        var at = 0;
        var after = await SoakAsync("resistor 450 ohm", bank, bringUp: false, async desk =>
        {
            await UntilAsync(desk, _ => desk.BringUp is { State: "ready" });
            at = desk.BringUp!.At;
            _bench.Amps = steps[2].MiddleAmps;
            await UntilAsync(desk, _ => desk.BringUp!.Over);
        });

        Assert.Equal(1, at);
        Assert.Equal(before.Run, _store.Run(after.Run!).Info.ResumedFrom);
        Assert.DoesNotContain(after.Findings, finding => finding.Signature is not Signature.MeterSilent);
    }

    private static async Task UntilAsync(Listening desk, Func<double, bool> good)
    {
        for (var attempt = 0; attempt < 1000 && !good(desk.Seconds); attempt++)
        {
            await Task.Delay(20, TestContext.Current.CancellationToken);
        }

        Assert.True(good(desk.Seconds), $"the soak never came to it; it stands at {desk.Seconds} s");
    }

    /// <summary>Starts a soak, or carries on the last, does something with it, and stops the service.</summary>
    private async Task<SoakDocument> SoakAsync(string unit, string bank, bool bringUp, Func<Listening, Task> play)
    {
        var options = QuietPage.Bench("attic", bank, unit);
        options.Meters[0].Transport.Port = _bench.Port;
        options.Meters[0].ReadingsPerSecond = 2;
        options.Meters[0].Accuracy.CountSize = 0.0001;
        options.Soak.StartFrom = "page";
        var listening = new Listening();
        var around = new SoakSurroundings(_clock, NullLogger.Instance, [], [listening]);
        listening.Desk = new BenchDesk(BenchPlan.From(options, LampInventory.Empty), LampInventory.Empty, _store, around, staysOpen: true, resumeWithin: TimeSpan.FromHours(1));
        var documents = new List<SoakDocument>();
        using var stop = new CancellationTokenSource();
        var running = listening.Desk.RunAsync(documents.Add, stop.Token);
        if (_store.Runs().Count == 0)
        {
            while (!listening.Desk.TryStart(new SoakRequest(unit, bank, 1, BringUp: bringUp)))
            {
                await Task.Delay(20, TestContext.Current.CancellationToken);
            }
        }

        await play(listening);
        await stop.CancelAsync();
        await running;
        return Assert.Single(documents);
    }

    private sealed class Listening : ISoakListener
    {
        private double _seconds;

        public BenchDesk Desk { get; set; } = null!;

        public double Seconds => Volatile.Read(ref _seconds);

        public BringUpStatus? BringUp { get; private set; }

        public ConcurrentQueue<AlertChange> Alerts { get; } = [];

        public ConcurrentQueue<Signature> Findings { get; } = [];

        public void Hear(SoakEvent happened)
        {
            switch (happened)
            {
                case Observed observed:
                    Volatile.Write(ref _seconds, observed.Observation.Seconds);
                    break;
                case AlertChanged alert:
                    Alerts.Enqueue(alert.Change);
                    break;
                case FindingChanged found:
                    Findings.Enqueue(found.Change.Finding.Signature);
                    break;
                case BringUpMoved moved:
                    BringUp = moved.Status;
                    break;
            }
        }
    }
}
