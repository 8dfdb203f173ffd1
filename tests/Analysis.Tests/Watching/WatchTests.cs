using Lampwarden.Analysis.Watching;
using Xunit;

namespace Lampwarden.Analysis.Tests.Watching;

public sealed class WatchTests
{
    private static readonly Expectation Healthy = new()
    {
        SteadyAmps = 0.412, BandLowAmps = 0.35, BandHighAmps = 0.48, ShortedAmps = 0.95, FirstReadingAmps = 0.9, SettleSeconds = 0.3,
    };

    private static Watch Bench(Expectation? expectation = null) =>
        new(new WatchSettings { ReadingsPerSecond = Series.Rate, Expectation = expectation, PlannedHours = 0.5 });

    [Fact]
    public void Observe_HealthyHour_FindsNothing()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(3600, t => 0.412 * (1 + (0.05 * Math.Exp(-t / 900)))));
        Assert.Empty(watch.Findings);
        Assert.Equal(WatchPhase.Watching, watch.Phase);
        Assert.Equal(Verdict.Passed, watch.Judge(3600).Verdict);
    }

    [Fact]
    public void Observe_ResistanceFallsOverMinutes_WarnsLongBeforeTheBankIsLit()
    {
        // 20 min healthy, then the unit's resistance falls with a time constant of 4 min; the bank caps the current.
        static double Amps(double t) => t < 1200 ? 0.412 : 0.95 - (0.538 * Math.Exp(-(t - 1200) / 400));
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(2400, Amps));
        var first = watch.Findings[0];
        Assert.Equal(Signature.DevelopingShort, first.Signature);
        Assert.Equal(Severity.Critical, first.Severity);
        Assert.InRange(first.OnsetSeconds, 1150, 1260);
        Assert.InRange(first.RaisedSeconds, 1200, 1290);
        Assert.True(Amps(first.RaisedSeconds) < 0.6 * 0.95);
        Assert.Equal(Verdict.Failed, watch.Judge(2400).Verdict);
    }

    [Fact]
    public void Observe_SuddenFullShort_IsNamedWithinThreeReadings()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(1800, t => t < 1500 ? 0.412 : 0.94));
        var first = watch.Findings[0];
        Assert.Equal(Signature.HardShort, first.Signature);
        Assert.InRange(first.RaisedSeconds, 1500, 1501);
    }

    [Fact]
    public void Observe_ShortFromPowerOn_IsSeenByTheAbsoluteLimit()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(20, _ => 0.94));
        Assert.Equal(Signature.HardShort, Assert.Single(watch.Findings).Signature);
        Assert.InRange(watch.Findings[0].RaisedSeconds, 0, 8);
    }

    [Fact]
    public void Observe_CircuitOpens_IsNamedOpen()
    {
        var watch = Bench();
        watch.Feed(Series.Of(1800, t => t < 1500 ? 0.412 : 0.0));
        Assert.Equal(Signature.OpenCircuit, watch.Findings[0].Signature);
        Assert.InRange(watch.Findings[0].RaisedSeconds, 1500, 1501);
    }

    [Fact]
    public void Observe_OneGarbledReading_RaisesNothing()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(3000, t => 0.412 * (t is 1000 or 2000 ? 2.7 : t is 1700 ? 0.3 : 1)));
        Assert.Empty(watch.Findings);
    }

    [Fact]
    public void Observe_MeterFallsSilent_RaisesAndClearsOnReturn()
    {
        var watch = Bench(Healthy);
        var changes = watch.Feed(Series.Of(900, t => t is >= 600 and < 660 ? double.NaN : 0.412));
        Assert.Equal([ChangeKind.Raised, ChangeKind.Cleared], changes.Select(change => change.Kind));
        Assert.Equal(Signature.MeterSilent, changes[0].Finding.Signature);
        Assert.InRange(changes[0].Finding.RaisedSeconds, 601, 603);
        Assert.Equal(660, changes[1].Finding.ClearedSeconds);
        Assert.Equal(60.5, Assert.Single(watch.Gaps).ToSeconds - watch.Gaps[0].FromSeconds, 6);
    }

    [Fact]
    public void Observe_Overload_IsNamedAndIsNoNumber()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(900, t => t is >= 600 and < 610 ? double.PositiveInfinity : 0.412));
        Assert.Equal(Signature.MeterOverload, Assert.Single(watch.Findings).Signature);
        Assert.NotNull(watch.Findings[0].ClearedSeconds);
    }

    [Fact]
    public void Observe_SettlesAboveTheBand_IsOffPrediction()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(120, _ => 0.55));
        Assert.Equal(Signature.OffPrediction, Assert.Single(watch.Findings).Signature);
        Assert.Equal(0.48, watch.Findings[0].Evidence["bandHighAmps"], 9);
    }

    [Fact]
    public void Announce_LoadChanged_IsNotTakenForAFault()
    {
        var watch = Bench();
        watch.Feed(Series.Of(1800, _ => 0.4));
        watch.Announce(1800, new Announcement(AnnouncementKind.LoadChanged, "volume up"));
        watch.Feed(Series.Of(1800, _ => 0.5).Select(o => o with { Seconds = o.Seconds + 1800 }));
        Assert.Empty(watch.Findings);
    }

    [Fact]
    public void Judge_EndedEarly_IsIncomplete()
    {
        var watch = Bench(Healthy);
        watch.Feed(Series.Of(600, _ => 0.412));
        var judgement = watch.Judge(600);
        Assert.Equal(Verdict.Incomplete, judgement.Verdict);
        Assert.Contains("0.17 h of the planned 0.5 h", judgement.Reasons[0], StringComparison.Ordinal);
    }

    [Fact]
    public void Save_InMidRun_ChangesNoLaterFinding()
    {
        static double Amps(double t) => t < 1500 ? 0.412 : 0.412 * (1 + ((t - 1500) / 6000));
        var series = Series.Of(2400, Amps).ToList();
        var straight = Bench(Healthy);
        var expected = straight.Feed(series);
        var halted = Bench(Healthy);
        var changes = halted.Feed(series.Take(2111));
        var restored = Watch.Restore(new WatchSettings { ReadingsPerSecond = Series.Rate, Expectation = Healthy, PlannedHours = 0.5 }, halted.Save());
        changes.AddRange(restored.Feed(series.Skip(2111)));
        Assert.NotEmpty(expected);
        Assert.Equal(expected.Select(Text), changes.Select(Text));
        Assert.Equal(straight.Save(), restored.Save());
    }

    [Fact]
    public void Watch_SettingsOutOfRange_NamesEveryFault()
    {
        var fault = Assert.Throws<ArgumentException>(() => new Watch(new WatchSettings { ReadingsPerSecond = 0, NominalMainsVolts = -1 }));
        Assert.Contains("ReadingsPerSecond is 0, expected 0.2 to 100", fault.Message, StringComparison.Ordinal);
        Assert.Contains("NominalMainsVolts is -1", fault.Message, StringComparison.Ordinal);
    }

    private static string Text(FindingChange change) => FormattableString.Invariant(
        $"{change.Kind} {change.Finding.Number} {change.Finding.Signature} {change.Finding.OnsetSeconds:R} {change.Finding.RaisedSeconds:R} {change.Finding.Explanation} {string.Join(' ', change.Finding.Evidence)}");
}
