using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Acquisition.Tests;

/// <summary>Free-running meters over real pseudo-terminals and TCP, described by the example configurations.</summary>
public sealed class LineMeterTests
{
    [Theory]
    [InlineData("words", true)]
    [InlineData("fields", true)]
    [InlineData("columns", true)]
    [InlineData("columns", false)]
    public async Task ReadAsync_ExampleDialects_GiveReadingsAtTheMetersOwnPace(string dialect, bool serial)
    {
        await using var bench = NewBench(dialect, serial ? TestBench.NewTerminal() : new TcpInstrumentPort());

        for (var sequence = 0; sequence < 20; sequence++)
        {
            var one = await bench.NextAsync();
            Assert.Equal((MeterEventKind.Reading, sequence, 0.4125, 4), (one.Kind, one.Sequence, one.Value, one.Digits));
            Assert.Equal(0.25, one.ElapsedSeconds - one.WindowStartSeconds, 9);
        }

        bench.World.Amps = 12;
        Assert.Equal(MeterEventKind.Overload, (await bench.UntilAsync(one => one.Kind != MeterEventKind.Reading)).Kind);
    }

    [Theory]
    [InlineData(MeterTrouble.Silent, GapReason.NoAnswer)]
    [InlineData(MeterTrouble.HalfLines, GapReason.NotANumber)]
    [InlineData(MeterTrouble.Garbled, GapReason.NotANumber)]
    [InlineData(MeterTrouble.Nuls, GapReason.NotANumber)]
    [InlineData(MeterTrouble.Endless, GapReason.LineTooLong)]
    public async Task ReadAsync_Trouble_GivesGapsAndNoWrongNumberAndPasses(MeterTrouble trouble, GapReason reason)
    {
        await using var bench = NewBench("words", TestBench.NewTerminal(), patienceSeconds: 0.1);
        await bench.NextAsync();

        bench.Meter.Begin(trouble);
        var seen = new List<MeterEvent>();
        await bench.UntilAsync(one => one.Reason == reason, seen);
        bench.Meter.End(trouble);
        await bench.UntilAsync(one => one.Kind == MeterEventKind.Reading, seen);

        Assert.All(seen.Where(one => one.Kind == MeterEventKind.Reading), one => Assert.Equal(0.4125, one.Value));
    }

    [Fact]
    public async Task ReadAsync_JoinedInTheMiddleOfALine_NeverTakesItsTailForANumber()
    {
        await using var port = TestBench.NewTerminal();
        var options = Examples.Meter("words");
        options.Transport.Port = port.Place;
        options.Protocol.Pattern = "^(AC )?(?<value>[0-9.]+) A$"; // takes '412 A' as gladly as 'AC 0.412 A'
        await using var session = new MeterSession(options, TimeProvider.System);
        await using var events = session.ReadAsync(TestContext.Current.CancellationToken).GetAsyncEnumerator(TestContext.Current.CancellationToken);

        var first = events.MoveNextAsync().AsTask();
        while (!session.Health.Connected)
        {
            await Task.Delay(10, TestContext.Current.CancellationToken);
        }

        await port.WriteAsync("412 A\nAC 0.413 A\n"u8.ToArray(), TestContext.Current.CancellationToken);
        await first;

        Assert.Equal(0.413, events.Current.Value);
        Assert.Equal(1, session.Health.LinesRefused[GapReason.NotANumber]);
    }

    [Fact]
    public async Task ReadAsync_UnpluggedAndBack_GivesGapsThenReadings()
    {
        await using var bench = NewBench("fields", TestBench.NewTerminal());
        await bench.NextAsync();

        bench.Meter.Unplug();
        await bench.UntilAsync(one => one.Reason == GapReason.PortMissing);
        bench.Meter.PlugIn();

        await bench.UntilAsync(one => one.Kind == MeterEventKind.Reading);
        Assert.Equal(2, bench.Session.Health.Openings);
    }

    private static TestBench NewBench(string dialect, IInstrumentPort port, double patienceSeconds = 10)
    {
        var example = Examples.Meter(dialect);
        return new TestBench(port, new SimulatedMeterOptions { Dialect = dialect, LinesPerSecond = 50, NoiseCounts = 0 }, options =>
        {
            options.Protocol = example.Protocol;
            options.WindowSeconds = example.WindowSeconds;
            options.ReplyTimeoutSeconds = patienceSeconds;
        });
    }
}
