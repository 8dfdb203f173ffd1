using Lampwarden.Analysis.Watching;
using Lampwarden.Benchmarks.Detection;
using Xunit;

namespace Lampwarden.Analysis.Tests.Watching;

/// <summary>The generator of the corpora, pinned; and the watch put through a few of their runs.</summary>
public sealed class CorpusTests
{
    // Blackman and Vigna's reference code from the state 1, 2, 3, 4 (values as carried in public test suites).
    [Fact]
    public void Xoshiro_FromReferenceState_GivesReferenceValues()
    {
        var random = new Xoshiro256(1, 2, 3, 4);
        ulong[] expected = [11520, 0, 1509978240, 1215971899390074240, 1216172134540287360, 607988272756665600, 16172922978634559625, 8476171486693032832];
        Assert.Equal(expected, expected.Select(_ => random.Next()));
    }

    // Vigna's splitmix64 from seed 1234567 (values as carried in public test suites).
    [Fact]
    public void SplitMix_FromReferenceSeed_GivesReferenceValues()
    {
        var state = 1234567UL;
        ulong[] expected = [6457827717110365317, 3203168211198807973, 9817491932198370423, 4593380528125082431, 16408922859458223821];
        Assert.Equal(expected, expected.Select(_ => Xoshiro256.SplitMix64(ref state)));
    }

    [Fact]
    public void Normal_ManyDraws_HasUnitVarianceAndNoMean()
    {
        var random = Xoshiro256.For(1, 1, 1);
        double sum = 0, squares = 0;
        const int Count = 200_000;
        for (var i = 0; i < Count; i++)
        {
            var n = random.Normal();
            sum += n;
            squares += n * n;
        }

        Assert.Equal(0, sum / Count, 0.01); // standard error 0.0022
        Assert.Equal(1, squares / Count, 0.015); // standard error 0.0032
    }

    [Fact]
    public void Generate_SameArguments_GivesTheSameReadings()
    {
        var (one, two) = (new CorpusRun(), new CorpusRun());
        one.Generate(new CorpusOptions(12), 3, Fault.All[4]);
        two.Generate(new CorpusOptions(12), 3, Fault.All[4]);
        Assert.Equal(one.Amps.Take(one.Count), two.Amps.Take(two.Count));
        Assert.Equal(one.Volts.Take(one.Count), two.Volts.Take(two.Count));
    }

    [Fact]
    public void Watch_SavedAndRestoredEveryHour_FindsTheSame()
    {
        var run = new CorpusRun();
        foreach (var fault in new[] { Fault.All[4], Fault.All[18], Fault.All[20] })
        {
            run.Generate(new CorpusOptions(12), 5, fault);
            var settings = new WatchSettings { ReadingsPerSecond = 2, MainsMeasured = true };
            var straight = new Watch(settings);
            var broken = new Watch(settings);
            List<string> expected = [], found = [];
            for (var i = 0; i < run.Count; i++)
            {
                var o = new Observation(run.Seconds(i), run.Amps[i], run.Volts[i]);
                expected.AddRange(straight.Observe(o).Select(Text));
                found.AddRange(broken.Observe(o).Select(Text));
                if (i % 6997 == 0)
                {
                    broken = Watch.Restore(settings, broken.Save());
                }
            }

            Assert.NotEmpty(expected);
            Assert.Equal(expected, found);
        }
    }

    [Fact]
    public void Observe_OnceSettled_AllocatesNothingAndStaysSmall()
    {
        var run = new CorpusRun();
        run.Generate(new CorpusOptions(1) { Clean = true }, 1, Fault.Nothing);
        var watch = new Watch(new WatchSettings { ReadingsPerSecond = 2, MainsMeasured = true });
        long before = 0;
        for (var i = 0; i < 60_000; i++)
        {
            before = i == 20_000 ? GC.GetAllocatedBytesForCurrentThread() : before;
            watch.Observe(new Observation(run.Seconds(i), run.Amps[i], run.Volts[i]));
        }

        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
        Assert.True(watch.Save().Length < 16 * 1024);
    }

    [Theory]
    [InlineData("creep 5 %/h", 1200, Signature.DevelopingShort, Signature.Runaway)]
    [InlineData("creep 20 %/h", 240, Signature.DevelopingShort, Signature.DevelopingShort)]
    [InlineData("short +10 %", 2, Signature.HardShort, Signature.HardShort)]
    [InlineData("lamp -2 %", 10, Signature.LampOut, Signature.LampOut)]
    [InlineData("arc 5/min 40 %", 120, Signature.Intermittent, Signature.Intermittent)]
    [InlineData("hiccup 6 s", 2, Signature.Cycling, Signature.Cycling)]
    public void Watch_FaultOfTheCorpus_IsFoundInTimeAndNamed(string name, double within, Signature right, Signature alsoRight)
    {
        var run = new CorpusRun();
        run.Generate(new CorpusOptions(13), 2, Fault.All.Single(fault => fault.Name == name));
        var watch = new Watch(new WatchSettings { ReadingsPerSecond = 2, MainsMeasured = true });
        for (var i = 0; i < run.Count && run.Seconds(i) < run.Truth.OnsetSeconds + within + 12; i++)
        {
            watch.Observe(new Observation(run.Seconds(i), run.Amps[i], run.Volts[i]));
        }

        var finding = Assert.Single(watch.Findings, finding => finding.Signature is not (Signature.MainsShift or Signature.MeterStuck or Signature.MeterSilent));
        Assert.InRange(finding.RaisedSeconds - run.Truth.OnsetSeconds, 0, within);
        Assert.True(finding.Signature == right || finding.Signature == alsoRight, finding.Explanation);
    }

    private static string Text(FindingChange change) => FormattableString.Invariant(
        $"{change.Kind} {change.Finding.Number} {change.Finding.Signature} {change.Finding.OnsetSeconds:R} {change.Finding.Explanation} {string.Join(' ', change.Finding.Evidence)}");
}
