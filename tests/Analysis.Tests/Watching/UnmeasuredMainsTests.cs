using Lampwarden.Analysis.Watching;
using Xunit;

namespace Lampwarden.Analysis.Tests.Watching;

/// <summary>What changes where the mains is not measured.</summary>
public sealed class UnmeasuredMainsTests
{
    private static Watch Bench() => new(new WatchSettings { ReadingsPerSecond = Series.Rate });

    [Fact]
    public void Notes_MainsNotMeasured_SayWhatThatCosts() =>
        Assert.Contains(Bench().Notes, note => note.Contains("3 to 5 times later", StringComparison.Ordinal));

    [Fact]
    public void Observe_DipThatComesBack_IsAMainsNotice()
    {
        var watch = Bench();
        watch.Feed(Series.Of(5000, t => t is > 4000 and < 4030 ? 0.47 : 0.5));
        var finding = Assert.Single(watch.Findings);
        Assert.Equal((Signature.MainsShift, Severity.Notice), (finding.Signature, finding.Severity));
    }

    [Theory]
    [InlineData(1.05, Signature.HardShort)]
    [InlineData(0.93, Signature.LampOut)]
    public void Observe_StepThatOutlastsADip_IsNamedAfterAMinuteAndAHalf(double factor, Signature expected)
    {
        var watch = Bench();
        watch.Feed(Series.Of(4300, t => t > 4000 ? 0.5 * factor : 0.5));
        var finding = Assert.Single(watch.Findings);
        Assert.Equal(expected, finding.Signature);
        Assert.InRange(finding.RaisedSeconds, 4085, 4100);
    }

    [Fact]
    public void Observe_TapChange_IsNoFaultOfTheUnit()
    {
        var watch = Bench();
        watch.Feed(Series.Of(6000, t => t > 4000 ? 0.505 : 0.5));
        Assert.All(watch.Findings, finding => Assert.Equal((Signature.MainsShift, Severity.Notice), (finding.Signature, finding.Severity)));
    }

    [Fact]
    public void Observe_LargeStep_IsNamedAtOnce()
    {
        var watch = Bench();
        watch.Feed(Series.Of(4100, t => t > 4000 ? 0.7 : 0.5));
        Assert.Equal(Signature.HardShort, Assert.Single(watch.Findings).Signature);
        Assert.InRange(watch.Findings[0].RaisedSeconds, 4000, 4002);
    }
}
