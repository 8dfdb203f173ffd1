using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Simulator.Instruments;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Acquisition.Tests;

/// <summary>Every trouble a meter can make, once, over a real pseudo-terminal: what is given for it, that no wrong number is, and that it passes.</summary>
public sealed class MeterTroubleTests
{
    private const double Truth = 0.4125;

    public static TheoryData<MeterTrouble, GapReason[]> TroublesThatTakeTheReadingAway => new()
    {
        { MeterTrouble.Silent, [GapReason.NoAnswer] },
        { MeterTrouble.HalfLines, [GapReason.NotANumber] },
        { MeterTrouble.Garbled, [GapReason.NotANumber, GapReason.NoAnswer, GapReason.StaleAnswer, GapReason.LineTooLong] },
        { MeterTrouble.Late, [GapReason.NoAnswer, GapReason.NotANumber, GapReason.StaleAnswer] },
        { MeterTrouble.Restarted, [GapReason.NoAnswer] },
    };

    [Theory]
    [MemberData(nameof(TroublesThatTakeTheReadingAway))]
    public async Task ReadAsync_TroubleThatTakesTheReadingAway_GivesGapsWithReasonsAndNoWrongNumber(MeterTrouble trouble, GapReason[] reasons)
    {
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.ReplyTimeoutSeconds = 0.1);
        await bench.NextAsync();

        bench.Meter.Begin(trouble);
        var seen = new List<MeterEvent>();
        for (var gaps = 0; gaps < 6;)
        {
            gaps += (await bench.UntilAsync(_ => true, seen)).Kind == MeterEventKind.Gap ? 1 : 0;
        }

        bench.Meter.End(trouble);
        await bench.UntilAsync(one => one.Kind == MeterEventKind.Reading, seen);

        Assert.All(seen.Where(one => one.Kind == MeterEventKind.Reading), one => Assert.Equal(Truth, one.Value));
        // The patience is short here, so a busy machine may add a gap of its own.
        Assert.All(seen.Where(one => one.Kind == MeterEventKind.Gap), one => Assert.Contains(one.Reason, reasons.Append(GapReason.NoAnswer)));
        Assert.Contains(seen, one => reasons.Contains(one.Reason));
        Assert.DoesNotContain(seen, one => one.Kind == MeterEventKind.Overload);
        AssertBalanced(bench.Session.Health, seen.Count + 1);
    }

    [Fact]
    public async Task ReadAsync_LateAnswer_IsNeverTakenForTheAnswerOfNow()
    {
        // The meter answers the question before last while the current rises: an answer taken for the wrong question would be an old value.
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.ReplyTimeoutSeconds = 0.1);
        await bench.NextAsync();

        bench.Meter.Begin(MeterTrouble.Late);
        await bench.UntilAsync(one => one.Kind == MeterEventKind.Gap);
        bench.World.Amps = 1.5;
        var seen = new List<MeterEvent>();
        for (var polls = 0; polls < 8; polls++)
        {
            await bench.UntilAsync(_ => true, seen);
        }

        Assert.DoesNotContain(seen, one => one.Kind == MeterEventKind.Reading);
        Assert.True(bench.Session.Health.LinesRefused[GapReason.StaleAnswer] > 0);
    }

    [Fact]
    public async Task ReadAsync_BabblingMeter_RefusesWhatNobodyAskedFor()
    {
        await using var bench = new TestBench(TestBench.NewTerminal());
        await bench.NextAsync();

        bench.Meter.Begin(MeterTrouble.Babbling);
        await bench.UntilAsync(_ => bench.Session.Health.LinesRefused.GetValueOrDefault(GapReason.StaleAnswer) > 20);
        var seen = new List<MeterEvent>();
        await bench.UntilAsync(_ => bench.Session.Health.LinesRefused.GetValueOrDefault(GapReason.StaleAnswer) > 400, seen);
        bench.Meter.End(MeterTrouble.Babbling);
        await bench.UntilAsync(one => one.Value == Truth, seen);

        // What it babbles are numbers too: once it is known to babble, none of them may be believed.
        Assert.All(seen.Where(one => one.Kind == MeterEventKind.Reading), one => Assert.Equal(Truth, one.Value));
        Assert.All(seen.Where(one => one.Kind == MeterEventKind.Gap), one => Assert.Contains(one.Reason, (GapReason[])[GapReason.StaleAnswer, GapReason.NoAnswer]));
    }

    [Fact]
    public async Task ReadAsync_StatusAnsweredTwiceInOnePiece_IsNotTakenForTheReading()
    {
        // The answer to *ESR? is a number as well: its second copy must not become a current of 0 A.
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.Protocol.StatusSeconds = 0.001);
        await bench.NextAsync();
        bench.Meter.Begin(MeterTrouble.Glued);

        for (var poll = 0; poll < 20; poll++)
        {
            Assert.Equal(Truth, (await bench.NextAsync()).Value);
        }
    }

    [Fact]
    public async Task ReadAsync_StuckValue_IsPassedOnAndCounted()
    {
        // A steady current and a stuck display look alike on the wire; the watch tells them apart by the noise that is missing.
        await using var bench = new TestBench(TestBench.NewTerminal());
        await bench.NextAsync();
        bench.Meter.Begin(MeterTrouble.Stuck);
        await bench.NextAsync();
        bench.World.Amps = 0.9;

        for (var poll = 0; poll < 20; poll++)
        {
            Assert.Equal(Truth, (await bench.NextAsync()).Value);
        }

        Assert.True(bench.Session.Health.SameReadings >= 20);
        bench.Meter.End(MeterTrouble.Stuck);
        await bench.UntilAsync(one => one.Value == 0.9);
    }

    [Fact]
    public async Task ReadAsync_Nuls_AreBlanksAroundANumberAndARefusalInside()
    {
        await using var bench = new TestBench(TestBench.NewTerminal());
        await bench.NextAsync();

        bench.Meter.Begin(MeterTrouble.Nuls);
        var refused = await bench.UntilAsync(one => one.Kind == MeterEventKind.Gap);
        var reading = await bench.UntilAsync(one => one.Kind == MeterEventKind.Reading);

        Assert.Equal(GapReason.NotANumber, refused.Reason);
        Assert.Contains("<00>", refused.Detail, StringComparison.Ordinal);
        Assert.Equal(Truth, reading.Value);
    }

    [Fact]
    public async Task ReadAsync_NulsInAStatusAnswer_AreGotOver()
    {
        // "0" and its line end: the shortest line there is.
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.Protocol.StatusSeconds = 0.001);
        await bench.NextAsync();
        bench.Meter.Begin(MeterTrouble.Nuls);
        for (var poll = 0; poll < 20; poll++)
        {
            await bench.NextAsync();
        }

        bench.Meter.End(MeterTrouble.Nuls);
        await bench.UntilAsync(one => one.Value == Truth);
    }

    [Fact]
    public async Task ReadAsync_AMegabyteWithoutLineEnd_IsThrownAwayInBoundedMemory()
    {
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.ReplyTimeoutSeconds = 0.1);
        await bench.NextAsync();

        bench.Meter.Begin(MeterTrouble.Endless);
        var gap = await bench.UntilAsync(one => one.Kind == MeterEventKind.Gap);
        await bench.UntilAsync(one => one.Value == Truth);

        Assert.Contains(gap.Reason, (GapReason[])[GapReason.LineTooLong, GapReason.NotANumber]);
        Assert.Equal(1, bench.Session.Health.LinesRefused[GapReason.LineTooLong]);
        Assert.Contains(bench.Session.Health.Problems, one => one.Contains("longer than 4096 bytes", StringComparison.Ordinal));
    }

    [Theory]
    [InlineData(MeterTrouble.Split)]
    [InlineData(MeterTrouble.Glued)]
    public async Task ReadAsync_LinesInPiecesOrTwice_AreReadAllTheSame(MeterTrouble trouble)
    {
        await using var bench = new TestBench(TestBench.NewTerminal());
        await bench.NextAsync();

        bench.Meter.Begin(trouble);

        for (var poll = 0; poll < 20; poll++)
        {
            Assert.Equal(Truth, (await bench.NextAsync()).Value);
        }
    }

    [Theory]
    [InlineData("\r\n", false)]
    [InlineData("\r", false)]
    [InlineData("\n\r", false)]
    [InlineData("\n", true)]
    [InlineData("\r\n", true)]
    public async Task ReadAsync_AnyTerminatorAndEcho_GiveReadings(string terminator, bool echo)
    {
        await using var bench = new TestBench(TestBench.NewTerminal(), new SimulatedMeterOptions { Terminator = terminator, Echo = echo, NoiseCounts = 0 });

        for (var poll = 0; poll < 10; poll++)
        {
            Assert.Equal(Truth, (await bench.NextAsync()).Value);
        }

        Assert.Empty(bench.Session.Health.LinesRefused);
    }

    [Fact]
    public async Task ReadAsync_RestartBetweenTwoPolls_IsFoundByTheEventStatusAndSetUpAgain()
    {
        await using var bench = new TestBench(
            TestBench.NewTerminal(),
            new SimulatedMeterOptions { Quantity = MeasuredQuantity.MainsVoltage, NoiseCounts = 0 },
            options => options.Protocol.StatusSeconds = 0.1);
        await bench.NextAsync();

        bench.Meter.Begin(MeterTrouble.Restarted);
        bench.Meter.End(MeterTrouble.Restarted);

        var gap = await bench.UntilAsync(one => one.Reason == GapReason.MeterRestarted);
        Assert.Contains("*ESR?", gap.Detail, StringComparison.Ordinal);
        Assert.Equal(Truth, (await bench.NextAsync()).Value);
    }

    [Fact]
    public async Task ReadAsync_CommandTheMeterRefuses_ReportsItsErrorQueue()
    {
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.Protocol.SetUp = ["CONFigure:CURRent:AC 3", "DISPlay:COLour 7", "CONF:CURR:AC 99"]);

        await bench.NextAsync();

        Assert.Equal(
            ["after 'DISPlay:COLour 7' the meter reports -113,\"Undefined header\"", "after 'CONF:CURR:AC 99' the meter reports -222,\"Data out of range\""],
            bench.Session.Health.Problems);
    }

    [Fact]
    public async Task ReadAsync_MeterSilentFromTheStart_GivesGapsAndNotAHang()
    {
        await using var port = TestBench.NewTerminal();
        var options = TestBench.OptionsFor(port);
        options.ReplyTimeoutSeconds = 0.1;
        await using var session = new MeterSession(options, TimeProvider.System);

        await foreach (var one in session.ReadAsync(TestContext.Current.CancellationToken))
        {
            Assert.Equal(GapReason.NoAnswer, one.Reason);
            Assert.Contains("meter off, cable loose", one.Detail, StringComparison.Ordinal);
            if (one.Sequence == 3)
            {
                break;
            }
        }
    }

    [Fact]
    public async Task ReadAsync_ProgramHeldUp_GivesOneStalledGapAndNoBunch()
    {
        var time = new FakeTimeProvider();
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.ReadingsPerSecond = 10, time: time);
        var seen = new List<MeterEvent> { await bench.NextAsync() };

        // Thirty seconds pass at a stroke, again and again: where the session was waiting for its next poll it wakes up late.
        do
        {
            var next = bench.UntilAsync(_ => true, seen);
            while (!next.IsCompleted)
            {
                time.Advance(TimeSpan.FromSeconds(30));
                await Task.WhenAny(next, Task.Delay(50, TestContext.Current.CancellationToken));
            }
        }
        while (!seen.Exists(one => one.Reason == GapReason.Stalled));
        var reading = await bench.UntilAsync(_ => true, seen);

        var stalled = seen[^2];
        Assert.Equal((GapReason.Stalled, MeterEventKind.Reading), (stalled.Reason, reading.Kind));
        Assert.Matches("^this program was held up for [0-9]+[.][0-9] s and left out [0-9]{3,} polls", stalled.Detail);
        Assert.Equal(reading.Sequence, stalled.Sequence + 1);
        Assert.True(bench.Session.Health.SkippedPolls >= 290);
    }

    private static void AssertBalanced(MeterHealth health, long events)
    {
        // The session goes on while we look, so it may be ahead of what was read, never behind.
        Assert.True(health.Readings + health.Overloads + health.Gaps.Values.Sum() >= events);
        Assert.Equal(health.Readings + health.Overloads, health.LinesUsed);
        Assert.InRange(health.LinesReceived - health.LinesUsed - health.LinesPassedOver - health.LinesRefused.Values.Sum(), 0, 1);
    }
}
