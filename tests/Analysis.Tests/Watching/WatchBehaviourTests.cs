using Lampwarden.Analysis.Watching;
using Xunit;

namespace Lampwarden.Analysis.Tests.Watching;

/// <summary>What the watch makes of units and meters that behave in ways of their own.</summary>
public sealed class WatchBehaviourTests
{
    private static readonly Expectation Bank = new()
    {
        SteadyAmps = 0.5, BandLowAmps = 0.4, BandHighAmps = 0.6, ShortedAmps = 1.2, SettleSeconds = 0.3,
        Lamps = [new ExpectedLamp("north", 0.40), new ExpectedLamp("east", 0.45)],
    };

    private static Watch Bench(Expectation? expectation = null, bool mains = false) =>
        new(new WatchSettings { ReadingsPerSecond = Series.Rate, Expectation = expectation, MainsMeasured = mains });

    private static double Volts(double t) => 120 + (1.5 * Math.Sin(t / 500)) + (0.3 * Math.Sin(t / 7));

    [Fact]
    public void Observe_ThermostatFromTheStart_IsLearnedAndLeftInPeace()
    {
        // Ten minutes: six on, four off at a third of the current.
        static double Amps(double t) => t % 600 < 360 ? 0.9 : 0.3;
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(5 * 3600, Amps, volts: Volts));
        Assert.All(watch.Findings, finding => Assert.Equal(Signature.Cycling, finding.Signature));
        Assert.All(watch.Findings, finding => Assert.Equal(Severity.Notice, finding.Severity));
        Assert.All(watch.Findings, finding => Assert.True(finding.RaisedSeconds < 1800));
        Assert.Equal(Verdict.Passed, watch.Judge(5 * 3600).Verdict);
    }

    [Fact]
    public void Observe_ThermostatStopsSwitching_IsNoticed()
    {
        static double Amps(double t) => t > 9000 || t % 600 < 360 ? 0.9 : 0.3;
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(3 * 3600 + 1800, Amps, volts: Volts));
        var last = watch.Findings[^1];
        Assert.Equal(Signature.OffPrediction, last.Signature);
        Assert.InRange(last.RaisedSeconds, 9000 + 1000, 9000 + 2400);
    }

    [Fact]
    public void Observe_CreepBehindAThermostat_IsFound()
    {
        static double Amps(double t) => (t % 600 < 360 ? 0.9 : 0.3) * (1 + (Math.Max(0, t - 9000) / 3600 * 0.05));
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(4 * 3600, Amps, volts: Volts));
        Assert.Contains(watch.Findings, finding => finding.Signature is Signature.DevelopingShort or Signature.Runaway && finding.RaisedSeconds > 9000);
    }

    [Theory]
    [InlineData(5, 1)]
    [InlineData(2, 2)]
    [InlineData(10, 3)]
    public void Observe_MainsStepSeenLateByASlowerMainsMeter_IsNoFaultOfTheUnit(double rate, double mainsEverySeconds)
    {
        var watch = new Watch(new WatchSettings { ReadingsPerSecond = rate, MainsMeasured = true, MainsReadingsPerSecond = 1 / mainsEverySeconds });
        static double Mains(double t) => (1 + (0.004 * Math.Sin(t / 700))) * (t < 9000.3 ? 1 : 0.88);
        double Shown(double t) => 230 * Mains(Math.Floor(t / mainsEverySeconds) * mainsEverySeconds) * (1 + (0.0003 * Math.Sin(Math.Floor(t / mainsEverySeconds) * 5)));
        watch.Feed(Series.Of(10_000, t => 0.3 * Math.Pow(Mains(t), 0.8), noiseShare: 0.001, volts: Shown, rate: rate));
        Assert.All(watch.Findings, finding => Assert.Equal(Signature.MainsShift, finding.Signature));
        Assert.NotEmpty(watch.Findings);
    }

    [Theory]
    [InlineData(0.2)]
    [InlineData(2)]
    public void Observe_MainsMeterSilentForAMinute_WhatTheMainsDidMeanwhileIsNoFault(double rate)
    {
        var watch = new Watch(new WatchSettings { ReadingsPerSecond = rate, MainsMeasured = true });
        static double Mains(double t) => 1 + (0.004 * Math.Sin(t / 700)) + (0.012 * Math.Clamp((t - 15_000) / 30, 0, 1));
        watch.Feed(Series.Of(20_000, t => 0.3 * Math.Pow(Mains(t), 0.8), noiseShare: 0.001, volts: t => t is > 14_990 and < 15_050 ? double.NaN : 230 * Mains(t), rate: rate));
        Assert.Empty(watch.Findings);
    }

    [Theory]
    [InlineData(2, 0.87, 0.0005)]
    [InlineData(2, -0.9, 0.001)]
    [InlineData(2, 0.87, 0.003)]
    [InlineData(0.2, 0.87, 0.0005)]
    [InlineData(0.2, -0.9, 0.0005)]
    [InlineData(0.2, 0.5, 0.001)]
    public void Observe_MeasuredMainsStepsAfterHours_IsNoFaultOfTheUnit(double rate, double exponent, double meterNoise)
    {
        // The noise of the mains meter makes an exponent learned from small moves too small; a large move then shows the error.
        for (var seed = 1; seed <= 4; seed++)
        {
            var (random, wander) = (new Random(seed), 0.0);
            double Normal() => Enumerable.Range(0, 12).Sum(_ => random.NextDouble()) - 6;
            var watch = new Watch(new WatchSettings { ReadingsPerSecond = rate, MainsMeasured = true });
            for (var reading = 0; reading < 20_000 * rate; reading++)
            {
                var t = reading / rate;
                wander += (-wander / (1200 * rate)) + (0.004 * Math.Sqrt(2 / (1200 * rate)) * Normal());
                var mains = (1 + wander) * (t < 15_000 ? 1 : 0.88);
                watch.Observe(new Observation(t, 0.2863 * Math.Pow(mains, exponent) * (1 + (0.001 * Normal())), 230 * mains * (1 + (meterNoise * Normal()))));
            }

            Assert.Equal(Signature.MainsShift, Assert.Single(watch.Findings).Signature);
        }
    }

    [Theory]
    [InlineData(0.2, 600, false)]
    [InlineData(0.2, 600, true)]
    [InlineData(2, 120, false)]
    [InlineData(2, 3600, false)]
    public void Observe_CalmUnitAfterAGap_GivesNoFindingButTheSilence(double rate, double gapSeconds, bool mains)
    {
        // The slope of the last seconds before the gap and the end of the warm-up must not be drawn out over it.
        var watch = new Watch(new WatchSettings { ReadingsPerSecond = rate, MainsMeasured = mains });
        double Amps(double t)
        {
            var isGap = t % 7200 is > 5000 and var into && into < 5000 + gapSeconds;
            return isGap ? double.NaN : 0.5 * (1 + (0.02 * Math.Exp(-t / 900)));
        }

        watch.Feed(Series.Of(5 * 7200, Amps, volts: mains ? Volts : null, rate: rate));
        Assert.All(watch.Findings, finding => Assert.Equal(Signature.MeterSilent, finding.Signature));
    }

    [Theory]
    [InlineData(600)]
    [InlineData(3600)]
    public void Observe_UnitShortedDuringAGap_IsFoundAtItsEnd(double gapSeconds)
    {
        var watch = Bench();
        watch.Feed(Series.Of(9100 + gapSeconds, t => t < 9000 ? 0.5 : t < 9000 + gapSeconds ? double.NaN : 0.7));
        var finding = Assert.Single(watch.Findings, finding => finding.Signature != Signature.MeterSilent);
        Assert.Equal(Signature.HardShort, finding.Signature);
        Assert.InRange(finding.RaisedSeconds, 9000 + gapSeconds, 9003 + gapSeconds);
    }

    [Fact]
    public void Observe_LampGoesDark_IsNamedByItsEffect()
    {
        static double Amps(double t) => t < 5000 ? 0.5 : 0.5 * 0.806;
        var watch = Bench(Bank, mains: true);
        watch.Feed(Series.Of(5100, Amps, volts: Volts));
        var finding = Assert.Single(watch.Findings);
        Assert.Equal(Signature.LampOut, finding.Signature);
        Assert.Contains("lamp north has gone dark", finding.Explanation, StringComparison.Ordinal);
        Assert.True(finding.Evidence["likelierTimes"] > 3);
    }

    [Fact]
    public void Observe_FallThatNoLampExplains_IsNotBlamedOnALamp()
    {
        static double Amps(double t) => t < 5000 ? 0.5 : 0.5 * 0.6;
        var watch = Bench(Bank, mains: true);
        watch.Feed(Series.Of(5100, Amps, volts: Volts));
        Assert.Equal(Signature.OffPrediction, watch.Findings[0].Signature);
        Assert.Contains("a part of the unit has dropped out", watch.Findings[0].Explanation, StringComparison.Ordinal);
    }

    [Fact]
    public void Observe_LampComesBack_ClearsItsFinding()
    {
        static double Amps(double t) => t is > 5000 and < 6000 ? 0.5 * 0.8 : 0.5;
        var watch = Bench(Bank, mains: true);
        watch.Feed(Series.Of(6100, Amps, volts: Volts));
        Assert.NotNull(Assert.Single(watch.Findings).ClearedSeconds);
    }

    [Fact]
    public void Judge_LampOfTheBankFailed_IsIncompleteNotFailed()
    {
        static double Amps(double t) => t < 5000 ? 0.5 : 0.5 * 0.806;
        var watch = Bench(Bank, mains: true);
        watch.Feed(Series.Of(5100, Amps, volts: Volts));
        var judgement = watch.Judge(5100);
        Assert.Equal(Verdict.Incomplete, judgement.Verdict);
        Assert.StartsWith("The limiter itself failed", judgement.Reasons[0], StringComparison.Ordinal);
    }

    [Fact]
    public void Announce_LoadChanged_KeepsTheShortedLimitAndDropsTheBand()
    {
        var watch = Bench(Bank, mains: true);
        watch.Feed(Series.Of(3000, _ => 0.5, volts: Volts));
        watch.Announce(3000, new Announcement(AnnouncementKind.LoadChanged, "two bars on"));
        watch.Feed(Series.Of(600, _ => 0.8, volts: Volts).Select(o => o with { Seconds = o.Seconds + 3000 }));
        Assert.Empty(watch.Findings);
        watch.Feed(Series.Of(30, _ => 1.19, volts: Volts).Select(o => o with { Seconds = o.Seconds + 3600 }));
        Assert.Equal(Signature.HardShort, watch.Findings[0].Signature);
    }

    [Fact]
    public void Observe_MainsDipMeasured_IsAMainsEventOnly()
    {
        static double Dip(double t) => t is > 5000 and < 5020 ? 110 : Volts(t);
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(6000, t => 0.5 * Math.Pow(Dip(t) / 120, 0.7), volts: Dip));
        var finding = Assert.Single(watch.Findings);
        Assert.Equal(Signature.MainsShift, finding.Signature);
        Assert.InRange(finding.RaisedSeconds, 5000, 5002);
        Assert.NotNull(finding.ClearedSeconds);
    }

    [Fact]
    public void Observe_MeterHangs_IsNamedStuck()
    {
        var watch = Bench(mains: true);
        var held = 0.5;
        var series = Series.Of(5000, _ => 0.5, volts: Volts).Select(o => o with { LineAmps = Math.Round(o.LineAmps, 3) })
            .Select(o => o.Seconds < 4000 ? o with { LineAmps = held = o.LineAmps } : o with { LineAmps = held });
        watch.Feed(series);
        var finding = Assert.Single(watch.Findings);
        Assert.Equal(Signature.MeterStuck, finding.Signature);
        Assert.InRange(finding.RaisedSeconds, 4005, 4300);
    }

    [Fact]
    public void Observe_StartUpThatHesitates_IsSlowInrush()
    {
        static double Amps(double t) => 0.5 + (0.4 * Math.Exp(-t / 8));
        var watch = Bench(Bank with { ShortedAmps = 3, BandHighAmps = 2 });
        watch.Feed(Series.Of(120, Amps));
        Assert.Contains(watch.Findings, finding => finding.Signature == Signature.SlowInrush && finding.Evidence["settledSeconds"] is > 10 and < 25);
    }

    [Fact]
    public void Observe_HiccupOfSixSeconds_GivesPeriodAndDuty()
    {
        static double Amps(double t) => t < 4000 || t % 6 < 2 ? 0.5 : 0.01;
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(4100, Amps, volts: Volts));
        var finding = Assert.Single(watch.Findings);
        Assert.Equal(Signature.Cycling, finding.Signature);
        Assert.Equal(6, finding.Evidence["periodSeconds"], 0.12);
        Assert.Equal(1.0 / 3, finding.Evidence["dutyShare"], 0.05);
    }

    [Fact]
    public void Observe_SwitchedOffForTenMinutes_IsOpenAndClearsLater()
    {
        static double Amps(double t) => t is > 4000 and < 4600 ? 0.0 : 0.5;
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(7000, Amps, volts: Volts));
        var finding = Assert.Single(watch.Findings);
        Assert.Equal(Signature.OpenCircuit, finding.Signature);
        Assert.NotNull(finding.ClearedSeconds);
    }

    [Fact]
    public void Observe_ScaledReadings_GiveTheSameFindings()
    {
        static double Amps(double t) => t < 12000 ? 0.5 : 0.5 * (1 + ((t - 12000) / 3600 * 0.1));
        var one = Bench(mains: true);
        var ten = Bench(mains: true);
        one.Feed(Series.Of(14000, Amps, volts: Volts));
        ten.Feed(Series.Of(14000, t => Amps(t) * 8, volts: Volts)); // a power of two: not one bit of the logarithm's increments may matter
        Assert.Equal(one.Findings.Select(finding => (finding.Signature, finding.RaisedSeconds)), ten.Findings.Select(finding => (finding.Signature, finding.RaisedSeconds)));
        Assert.NotEmpty(one.Findings);
    }

    [Fact]
    public void Observe_RisingCurrent_ForetellsTheWarningLevel()
    {
        // 10 %/h from 12000 s: the band's upper end, 20 % above, is reached two hours after the onset.
        static double Amps(double t) => t < 12000 ? 0.5 : 0.5 * (1 + ((t - 12000) / 3600 * 0.1));
        var watch = Bench(Bank, mains: true);
        watch.Feed(Series.Of(13000, Amps, volts: Volts));
        var finding = watch.Findings.First(finding => finding.Signature == Signature.DevelopingShort);
        var due = 12000 + 7200 - 13000;
        Assert.InRange(due, finding.Evidence["warningInLowSeconds"] * 0.8, finding.Evidence["warningInHighSeconds"] * 1.2);
    }

    [Fact]
    public void Observe_ClockStepsBack_IsSurvived()
    {
        var watch = Bench(mains: true);
        watch.Feed(Series.Of(4000, _ => 0.5, volts: Volts));
        watch.Feed(Series.Of(1000, _ => 0.5, volts: Volts).Select(o => o with { Seconds = o.Seconds + 3900 }));
        Assert.Empty(watch.Findings);
    }
}
