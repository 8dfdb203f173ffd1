using Lampwarden.Acquisition;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Commands.Calibrating;
using Lampwarden.Host.Configuration;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Host.Tests.Commands.Calibrating;

public sealed class CalibrationWalkTests
{
    private static readonly LampOptions Lamp = new() { Name = "north", RatedWatts = 60, RatedVolts = 120 };

    [Fact]
    public async Task AskAsync_EnterAtEveryQuestion_ReadsByMeterAndTakesOffTheLeads()
    {
        await using var port = new TcpInstrumentPort();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { NoiseCounts = 0, ResistanceOhms = 16.4 }, new Shorted(), port, TimeProvider.System);

        var measured = await Walk("22\n\n0.3\n\n119.4\n-\n", port).AskAsync(Lamp, TestContext.Current.CancellationToken);

        Assert.Equal(16.1, measured.ColdOhms!.Value, 9);
        Assert.Equal((22.0, 0.497, 119.4), (measured.RoomCelsius, measured.ShortedAmps, measured.ShortedVolts));
        Assert.Null(measured.DimAmps);
    }

    [Fact]
    public async Task AskAsync_MeterWithoutOhms_SaysSoAndTakesWhatIsTyped()
    {
        await using var port = new TcpInstrumentPort();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { NoiseCounts = 0 }, new Shorted(), port, TimeProvider.System);
        var prose = new StringWriter();

        var measured = await Walk("22\nabout 16\n16.1\n0\n-\n-\n", port, prose).AskAsync(Lamp, TestContext.Current.CancellationToken);

        Assert.Equal(16.1, measured.ColdOhms);
        Assert.Null(measured.ShortedAmps);
        Assert.Contains("A number with a decimal point, please", prose.ToString(), StringComparison.Ordinal);
        Assert.Contains("A lamp limiter does not isolate", prose.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public async Task AskAsync_AnswersEndTooSoon_IsBadInput()
    {
        await using var port = new TcpInstrumentPort();

        await Assert.ThrowsAsync<BadInputException>(() => Walk("22\n", port).AskAsync(Lamp, TestContext.Current.CancellationToken));
    }

    private static CalibrationWalk Walk(string typed, TcpInstrumentPort port, TextWriter? prose = null) => new(
        new StringReader(typed),
        prose ?? TextWriter.Null,
        new MeterOptions
        {
            Name = "line",
            ReadingsPerSecond = 20,
            ReplyTimeoutSeconds = 10,
            Transport = { Kind = "tcp", Port = port.Port.ToString(System.Globalization.CultureInfo.InvariantCulture) },
            Protocol = { SetUp = ["CONFigure:CURRent:AC 3"] },
        },
        null,
        120);

    private sealed class Shorted : ISimulatedQuantity
    {
        public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) => 0.497;
    }
}
