using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Tests.Commands;

public sealed class CalibrateCommandTests
{
    private const string Config = """
        { "lamps": [ { "name": "north", "ratedWatts": 60, "ratedVolts": 120, "fill": "gas" } ],
          "benches": [ { "name": "b", "mains": "120 V 60 Hz", "bank": "north", "unit": "resistor 300 ohm",
            "meters": [ { "name": "line", "transport": { "port": "/dev/ttyUSB0" } } ] } ] }
        """;

    [Fact]
    public async Task Calibrate_ValuesTyped_ShowsTheCurveBeforeAndAfterAndWritesThem()
    {
        var (exit, output, path) = await Run("north", "--shorted-amps", "0.497", "--shorted-volts", "119.4", "--json");

        Assert.Equal(0, exit);
        var shorted = JsonDocument.Parse(output).RootElement.GetProperty("lamps")[0].GetProperty("curve")[0];
        Assert.Equal(0, shorted.GetProperty("unitOhms").GetDouble());
        Assert.Equal(0.497, shorted.GetProperty("afterAmps").GetDouble(), 0.003); // 119.4 V measured, 120 V shown
        Assert.True(Width(shorted, "after") < Width(shorted, "before") / 2, "a measured lamp must be known better than its nameplate");
        Assert.Contains("\"calibration\": { \"shortedAmps\": 0.497, \"shortedVolts\": 119.4 }", await File.ReadAllTextAsync(path, TestContext.Current.CancellationToken), StringComparison.Ordinal);
    }

    [Fact]
    public async Task Calibrate_AnotherValueLater_KeepsTheFirst()
    {
        var (_, _, path) = await Run("north", "--shorted-amps", "0.497", "--shorted-volts", "119.4");

        var (exit, output, _) = await RunOn(path, "north", "--cold-ohms", "16.1", "--room-celsius", "22");

        Assert.True(exit == 0, output);
        Assert.Contains("{ \"coldOhms\": 16.1, \"roomCelsius\": 22, \"shortedAmps\": 0.497, \"shortedVolts\": 119.4 }", await File.ReadAllTextAsync(path, TestContext.Current.CancellationToken), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("There is no lamp 'south' in the inventory; there are north.", "south", "--cold-ohms", "16")]
    [InlineData("Cold ohms too high", "north", "--cold-ohms", "60")]
    [InlineData("needs the mains volts at that time", "north", "--shorted-amps", "0.497")]
    public async Task Calibrate_BadInput_SaysWhyWritesNothingAndReturns2(string why, params string[] args)
    {
        var (exit, output, path) = await Run(args);

        Assert.Equal(2, exit);
        Assert.Contains(why, output, StringComparison.Ordinal);
        Assert.Equal(Config, await File.ReadAllTextAsync(path, TestContext.Current.CancellationToken));
    }

    private static double Width(JsonElement point, string when) =>
        point.GetProperty(when + "HighAmps").GetDouble() - point.GetProperty(when + "LowAmps").GetDouble();

    private static async Task<(int Exit, string Output, string Path)> Run(params string[] args)
    {
        var path = Path.Combine(Directory.CreateTempSubdirectory("lampwarden-calibrate-").FullName, "bench.json");
        await File.WriteAllTextAsync(path, Config, TestContext.Current.CancellationToken);
        return await RunOn(path, args);
    }

    private static async Task<(int Exit, string Output, string Path)> RunOn(string path, params string[] args)
    {
        var (output, error) = (new StringWriter(), new StringWriter());
        var exit = await CommandLine.RunAsync(["calibrate", .. args, "--config", path], output, error);
        return (exit, exit == 0 ? output.ToString() : output.ToString() + error, path);
    }
}
