using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Acquisition.Transport;
using Lampwarden.Simulator.Instruments;
using NSubstitute;

namespace Lampwarden.Acquisition.Tests;

/// <summary>The whole stack: session, System.IO.Ports or sockets, kernel, simulated meter.</summary>
public sealed class MeterSessionTests
{
    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public async Task ReadAsync_HealthyMeter_GivesReadingsInOrderAndKnowsTheMeter(bool serial)
    {
        await using var bench = new TestBench(serial ? TestBench.NewTerminal() : new TcpInstrumentPort());

        for (var sequence = 0; sequence < 20; sequence++)
        {
            var one = await bench.NextAsync();
            Assert.Equal((MeterEventKind.Reading, sequence, 0.4125), (one.Kind, one.Sequence, one.Value));
            Assert.True(one.LatencySeconds > 0);
        }

        var health = bench.Session.Health;
        Assert.Equal("Gantry Mill,Wicket 4,000117,1.2", health.Identity);
        Assert.True(health.Connected);
        Assert.Empty(health.Problems);
        Assert.Empty(health.LinesRefused);
        Assert.Equal(health.LinesReceived, health.LinesUsed + health.LinesPassedOver);
    }

    [Fact]
    public async Task ReadAsync_CurrentBeyondTheRange_GivesOverloads()
    {
        await using var bench = new TestBench(TestBench.NewTerminal());
        await bench.NextAsync();

        bench.World.Amps = 3.4;

        var overload = await bench.UntilAsync(one => one.Kind != MeterEventKind.Reading);
        Assert.Equal((MeterEventKind.Overload, double.NaN, GapReason.None), (overload.Kind, overload.Value, overload.Reason));
    }

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public async Task ReadAsync_MeterUnpluggedAndBack_GivesGapsWithReasonsThenReadings(bool serial)
    {
        await using var bench = new TestBench(serial ? TestBench.NewTerminal() : new TcpInstrumentPort());
        await bench.NextAsync();

        bench.Port.Unplug();
        var gaps = new List<MeterEvent>();
        await bench.UntilAsync(one => one.Reason == GapReason.PortMissing, gaps);
        bench.Port.PlugIn();
        bench.World.Amps = 0.5;
        var back = await bench.UntilAsync(one => one.Kind == MeterEventKind.Reading && one.Value == 0.5, gaps);

        Assert.Contains(gaps, one => one.Reason == GapReason.Disconnected);
        Assert.All(gaps.Where(one => one.Kind == MeterEventKind.Gap), one => Assert.False(string.IsNullOrEmpty(one.Detail)));
        Assert.Equal(Enumerable.Range(1, gaps.Count).Select(n => (long)n), gaps.Select(one => one.Sequence));
        Assert.Equal(2, bench.Session.Health.Openings);
        Assert.True(back.ElapsedSeconds > gaps[0].ElapsedSeconds);
    }

    [Fact]
    public async Task ReadAsync_BackUnderAnotherName_IsFoundByTheNameThatStays()
    {
        var port = TestBench.NewTerminal();
        await using var bench = new TestBench(port);
        await bench.NextAsync();
        var before = port.SlavePath;

        port.PlugInElsewhere();
        bench.World.Amps = 0.5;

        await bench.UntilAsync(one => one.Value == 0.5);
        Assert.NotEqual(before, port.SlavePath);
    }

    [Fact]
    public async Task ReadAsync_WallClockSetInMidRun_GoesOnWithoutAGapAndTellsIt()
    {
        var time = new SetClock();
        await using var bench = new TestBench(TestBench.NewTerminal(), time: time);
        var before = await bench.NextAsync();

        time.Step = TimeSpan.FromHours(-2);
        var after = await bench.UntilAsync(one => one.Utc < before.Utc);

        Assert.Equal(MeterEventKind.Reading, after.Kind);
        Assert.Equal(-7200 + (after.ElapsedSeconds - before.ElapsedSeconds), (after.Utc - before.Utc).TotalSeconds, 0.05);
        Assert.Equal(1, bench.Session.Health.ClockSteps);
        Assert.Empty(bench.Session.Health.Gaps);
    }

    [Fact]
    public async Task ReadAsync_WireThatTakesNothing_GivesGapsAndNotAHang()
    {
        var transport = Substitute.For<IMeterTransport>();
        transport.OpenAsync(default).ReturnsForAnyArgs(_ => Task.FromResult(new MeterConnection(new DeafStream(), () => { })));
        var options = new MeterOptions { Name = "line", ReplyTimeoutSeconds = 0.05 };
        await using var session = new MeterSession(options, TimeProvider.System, transport);

        await foreach (var one in session.ReadAsync(TestContext.Current.CancellationToken))
        {
            Assert.Equal(GapReason.NoAnswer, one.Reason);
            if (one.Sequence == 2)
            {
                break;
            }
        }
    }

    [Fact]
    public async Task ReadAsync_UnpluggedAgainAndAgain_AlwaysComesBackAndCloses()
    {
        await using var bench = new TestBench(TestBench.NewTerminal());
        for (var round = 1; round <= 10; round++)
        {
            bench.World.Amps = round / 10.0;
            await bench.UntilAsync(one => one.Kind == MeterEventKind.Reading && Math.Abs(one.Value - (round / 10.0)) < 1e-9);
            bench.Port.Unplug();
            bench.Port.PlugIn();
        }

        Assert.True(bench.Session.Health.Openings >= 10);
    }

    [Theory]
    [InlineData("MEASure:CURRent:AC? 3")]
    [InlineData("INITiate;:FETCh?")]
    [InlineData("meas:curr:ac?")]
    public async Task ReadAsync_OtherQuestions_AreAnsweredToo(string query)
    {
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.Protocol.Query = query);

        Assert.Equal(0.4125, (await bench.NextAsync()).Value);
    }

    [Fact]
    public async Task ReadAsync_MissingPort_SaysSoAndHowToGoOn()
    {
        var options = new MeterOptions { Name = "line" };
        options.Transport.Port = "/dev/serial/by-id/usb-not-there";
        await using var session = new MeterSession(options, TimeProvider.System);

        await foreach (var one in session.ReadAsync(TestContext.Current.CancellationToken))
        {
            Assert.Equal(GapReason.PortMissing, one.Reason);
            Assert.Contains("There is no port /dev/serial/by-id/usb-not-there", one.Detail, StringComparison.Ordinal);
            break;
        }
    }

    [Fact]
    public async Task ReadAsync_CurrentRisesFromNothing_IsPolledAsFastAsTheMeterAnswers()
    {
        // At one poll in five seconds forty readings would take longer than the test may.
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options =>
        {
            options.ReadingsPerSecond = 0.2;
            options.SwitchOnSeconds = 600;
        });
        bench.World.Amps = 0;
        Assert.Equal(0, (await bench.NextAsync()).Value);

        bench.World.Amps = 1.8;
        for (var reading = 0; reading < 40; reading++)
        {
            Assert.Equal(1.8, (await bench.NextAsync()).Value);
        }
    }

    [Fact]
    public async Task Hurry_ForAWhile_IsPolledAsFastAsTheMeterAnswers()
    {
        await using var bench = new TestBench(TestBench.NewTerminal(), session: options => options.ReadingsPerSecond = 0.1);
        await bench.NextAsync();

        bench.Session.Hurry(TimeSpan.FromMinutes(10));

        for (var reading = 0; reading < 40; reading++)
        {
            Assert.Equal(0.4125, (await bench.NextAsync()).Value);
        }
    }

    [Fact]
    public async Task ReadAsync_Cancelled_EndsWithTheTokensException()
    {
        await using var port = TestBench.NewTerminal();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions(), new SteadyWorld(), port, TimeProvider.System);
        await using var session = new MeterSession(TestBench.OptionsFor(port), TimeProvider.System);
        using var stop = new CancellationTokenSource();

        await Assert.ThrowsAnyAsync<OperationCanceledException>(async () =>
        {
            await foreach (var one in session.ReadAsync(stop.Token))
            {
                await stop.CancelAsync();
            }
        });
    }

    [Fact]
    public async Task ReadAsync_Twice_IsRefused()
    {
        await using var bench = new TestBench(TestBench.NewTerminal());
        await bench.NextAsync();

        await Assert.ThrowsAsync<InvalidOperationException>(async () =>
        {
            await foreach (var one in bench.Session.ReadAsync(TestContext.Current.CancellationToken))
            {
            }
        });
    }

    /// <summary>The system's clock, whose wall time somebody sets.</summary>
    private sealed class SetClock : TimeProvider
    {
        public TimeSpan Step { get; set; }

        public override DateTimeOffset GetUtcNow() => base.GetUtcNow() + Step;
    }

    /// <summary>Takes nothing and says nothing until it is told to stop.</summary>
    private sealed class DeafStream : MemoryStream
    {
        public override async ValueTask<int> ReadAsync(Memory<byte> buffer, CancellationToken cancellationToken = default)
        {
            await Task.Delay(Timeout.Infinite, cancellationToken);
            return 0;
        }

        public override ValueTask WriteAsync(ReadOnlyMemory<byte> buffer, CancellationToken cancellationToken = default) =>
            new(Task.Delay(Timeout.Infinite, cancellationToken));
    }
}
