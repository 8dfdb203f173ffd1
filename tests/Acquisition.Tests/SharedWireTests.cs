using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Acquisition.Tests;

/// <summary>Line current and mains voltage from one instrument on one port, and from two.</summary>
public sealed class SharedWireTests
{
    private readonly SteadyWorld _world = new();

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public async Task ReadAsync_TwoQuantitiesOfOneScpiMeter_ShareItsWire(bool serial)
    {
        await using IInstrumentPort port = serial ? TestBench.NewTerminal() : new TcpInstrumentPort();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { NoiseCounts = 0 }, _world, port, TimeProvider.System);
        await using var amps = Session(port, Quantity.LineCurrent, "MEASure:CURRent:AC? 3");
        await using var volts = Session(port, Quantity.MainsVoltage, "MEASure:VOLTage:AC? 300");

        await Task.WhenAll(Expect(amps, 0.4125, 30), Expect(volts, 119.62, 30));

        Assert.Equal((1, 1), (amps.Health.Openings, volts.Health.Openings));
        Assert.Empty(amps.Health.LinesRefused);
        Assert.Empty(volts.Health.LinesRefused);
    }

    [Fact]
    public async Task ReadAsync_OneOfTwoLeavesTheWire_TheOtherReadsOnAndTheWireCanBeOpenedAnew()
    {
        await using var port = TestBench.NewTerminal();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { NoiseCounts = 0 }, _world, port, TimeProvider.System);
        await using var volts = Session(port, Quantity.MainsVoltage, "MEASure:VOLTage:AC? 300");
        var reading = Expect(volts, 119.62, 60);
        for (var round = 0; round < 3; round++)
        {
            await using var amps = Session(port, Quantity.LineCurrent, "MEASure:CURRent:AC? 3");
            await Expect(amps, 0.4125, 3);
        }

        await reading;
        await volts.DisposeAsync();
        await using var again = Session(port, Quantity.LineCurrent, "MEASure:CURRent:AC? 3");
        await Expect(again, 0.4125, 3);
    }

    [Fact]
    public async Task ReadAsync_LinesOfTwoQuantities_GoToTheMeterThatWantsThem()
    {
        await using var port = TestBench.NewTerminal();
        await using var amps = Session(port, Quantity.LineCurrent, "");
        await using var volts = Session(port, Quantity.MainsVoltage, "");
        var both = Task.WhenAll(Expect(amps, 0.4125, 5), Expect(volts, 119.62, 5));
        while (!amps.Health.Connected || !volts.Health.Connected)
        {
            await Task.Delay(10, TestContext.Current.CancellationToken);
        }

        while (!both.IsCompleted)
        {
            await port.WriteAsync("AC 0.4125 A\nAC 119.62 V\n"u8.ToArray(), TestContext.Current.CancellationToken);
            await Task.Delay(10, TestContext.Current.CancellationToken);
        }

        await both;
        Assert.True(amps.Health.LinesPassedOver > 0);
    }

    [Fact]
    public async Task ReadAsync_OneAnswerWithTwoValues_IsTakenApartByField()
    {
        await using var port = TestBench.NewTerminal();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { Identity = "Gantry Mill,Both 2,0,1" }, _world, port, TimeProvider.System);
        await using var session = Session(port, Quantity.LineCurrent, "*IDN?");
        session.Hurry(TimeSpan.Zero);

        await foreach (var one in session.ReadAsync(TestContext.Current.CancellationToken))
        {
            Assert.Contains("set protocol.field", one.Detail, StringComparison.Ordinal);
            break;
        }
    }

    private static MeterSession Session(IInstrumentPort port, Quantity quantity, string query)
    {
        var options = TestBench.OptionsFor(port);
        options.Quantity = quantity;
        options.Protocol.SetUp = [];
        options.Protocol.Query = query;
        if (query.Length == 0)
        {
            options.Protocol = Examples.Meter("words").Protocol;
            options.ReplyTimeoutSeconds = 10;
        }

        return new MeterSession(options, TimeProvider.System);
    }

    private static async Task Expect(MeterSession session, double value, int readings)
    {
        using var deadline = CancellationTokenSource.CreateLinkedTokenSource(TestContext.Current.CancellationToken);
        deadline.CancelAfter(TestBench.Deadline);
        await foreach (var one in session.ReadAsync(deadline.Token))
        {
            Assert.Equal((MeterEventKind.Reading, value), (one.Kind, one.Value));
            if (one.Sequence == readings - 1)
            {
                break;
            }
        }
    }
}
