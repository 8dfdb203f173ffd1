using System.Text.Json;
using Lampwarden.Host.Commands;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Host.Tests.Commands;

public sealed class CheckCommandTests
{
    [Fact]
    public async Task Check_MeterThatAnswers_PrintsItsIdentityReadingsAndTimingAndReturns0()
    {
        await using var port = new TcpInstrumentPort();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { NoiseCounts = 0 }, new Steady(), port, TimeProvider.System);

        var (exit, output, _) = await Run(Config(port.Port, """{ "setUp": [ "CONFigure:CURRent:AC 3" ] }"""), "--json");

        Assert.Equal(0, exit);
        var checkedMeter = JsonDocument.Parse(output).RootElement.GetProperty("meters")[0];
        Assert.True(checkedMeter.GetProperty("ok").GetBoolean());
        Assert.Equal("line", checkedMeter.GetProperty("name").GetString());
        Assert.Equal("Gantry Mill,Wicket 4,000117,1.2", checkedMeter.GetProperty("identity").GetString());
        Assert.Equal(Enumerable.Repeat(0.25, 10), checkedMeter.GetProperty("readings").EnumerateArray().Select(one => one.GetDouble()));
        Assert.True(checkedMeter.GetProperty("ratePerSecond").GetDouble() > 0);
        Assert.True(checkedMeter.GetProperty("jitterMs").GetDouble() >= 0);
    }

    [Fact]
    public async Task Check_RangeNotFixed_WarnsOfIt()
    {
        await using var port = new TcpInstrumentPort();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions(), new Steady(), port, TimeProvider.System);

        var (exit, output, _) = await Run(Config(port.Port, "{}"));

        Assert.Equal(0, exit);
        Assert.Contains("no range is set, so the meter ranges by itself", output, StringComparison.Ordinal);
        Assert.Contains("b, meter line: good", output, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Check_MeterThatIsNotThere_SaysSoAndReturns3()
    {
        await using var port = new TcpInstrumentPort();
        var number = port.Port;
        port.Unplug();

        var (exit, output, _) = await Run(Config(number, "{}"), "--readings", "1");

        Assert.Equal(3, exit);
        Assert.Contains($"127.0.0.1:{number} cannot be reached", output, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Check_DialectThatCannotBe_NamesTheKeyAndReturns2()
    {
        var (exit, output, error) = await Run(Config(5025, """{ "kind": "lines", "pattern": "^(?<volts>[0-9]+)$", "unit": "furlong" }"""));

        Assert.Equal((2, ""), (exit, output));
        Assert.Contains("benches[0].meters[0].protocol.pattern is '^(?<volts>[0-9]+)$': must have a group named value", error, StringComparison.Ordinal);
        Assert.Contains("benches[0].meters[0].protocol.unit is 'furlong': must be a unit of current, such as mA", error, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("words")]
    [InlineData("fields")]
    [InlineData("columns")]
    public void Load_ExampleDialects_AreInOrderAndMatchTheSimulatorsOwn(string dialect)
    {
        var folder = AppContext.BaseDirectory;
        while (!File.Exists(Path.Combine(folder, "Lampwarden.slnx")))
        {
            folder = Path.GetDirectoryName(folder)!;
        }

        var options = Lampwarden.Host.Configuration.ConfigurationFile.Load(Path.Combine(folder, "config", "meters", dialect + ".json"));

        Assert.Equal(LineDialect.Pattern(dialect), options.Benches[0].Meters[0].Protocol.Pattern);
    }

    private static async Task<(int Exit, string Output, string Error)> Run(string config, params string[] more)
    {
        var file = Path.Combine(Directory.CreateTempSubdirectory("lampwarden-check-").FullName, "bench.json");
        await File.WriteAllTextAsync(file, config, TestContext.Current.CancellationToken);
        var (output, error) = (new StringWriter(), new StringWriter());
        var exit = await CommandLine.RunAsync(["check", "--config", file, .. more], output, error);
        return (exit, output.ToString(), error.ToString());
    }

    private static string Config(int port, string protocol) => $$"""
        { "benches": [ { "name": "b", "mains": "120 V 60 Hz", "bank": "60 W", "unit": "resistor 300 ohm",
          "meters": [ { "name": "line", "quantity": "lineCurrent", "readingsPerSecond": 50, "windowSeconds": 0.02,
            "transport": { "kind": "tcp", "port": "{{port}}" }, "protocol": {{protocol}} } ] } ] }
        """;

    private sealed class Steady : ISimulatedQuantity
    {
        public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) => 0.25;
    }
}
