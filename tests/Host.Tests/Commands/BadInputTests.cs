using Lampwarden.Host.Tests.Recording;

namespace Lampwarden.Host.Tests.Commands;

/// <summary>Bad input: a clear message that names the place, the right exit code, and nothing written.</summary>
public sealed class BadInputTests
{
    [Fact]
    public async Task Predict_BankThatCannotBeRead_MarksThePlace()
    {
        var said = await Cli.RunAsync("predict", "--mains", "120 V 60 Hz", "--bank", "75 W || (25 W + ", "--unit", "resistor 300 ohm");
        Assert.Equal(2, said.Code);
        Assert.Contains("75 W || (25 W +", said.Error, StringComparison.Ordinal);
        Assert.Contains("^", said.Error, StringComparison.Ordinal);
        Assert.Empty(said.Output);
    }

    [Fact]
    public async Task Predict_LampOfMinusFiveWatts_IsRefused()
    {
        var said = await Cli.RunAsync("predict", "--mains", "120 V 60 Hz", "--bank", "-5 W", "--unit", "short");
        Assert.Equal(2, said.Code);
        Assert.Contains("-5 W", said.Error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Predict_WithoutBank_SaysWhichOptionIsMissing()
    {
        var said = await Cli.RunAsync("predict", "--mains", "120 V 60 Hz", "--unit", "short");
        Assert.Equal(2, said.Code);
        Assert.Contains("--bank", said.Error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Watch_ConfigWithFiveFaults_ListsFiveAndWritesNothing()
    {
        using var folder = new TempFolder();
        var config = Path.Combine(folder.Path, "bench.json");
        await File.WriteAllTextAsync(config, """
            { "benches": [ { "name": "attic", "mains": "120 V 600 Hz", "bank": "75 W", "unit": "kettle",
                "meters": [ { "name": "line", "transport": { "port": "/dev/ttyUSB7", "baudRate": 9 }, "readingsPerSecond": 5000, "windowSeconds": "long" } ] } ] }
            """, TestContext.Current.CancellationToken);

        var record = Path.Combine(folder.Path, "soaks");
        var said = await Cli.RunAsync("watch", "--config", config, "--record", record);

        Assert.Equal(2, said.Code);
        Assert.Contains("5 faults", said.Error, StringComparison.Ordinal);
        foreach (var key in new[] { "benches[0].mains is '120 V 600 Hz'", "transport.baudRate is '9'", "readingsPerSecond is '5000'", "windowSeconds is 'long'" })
        {
            Assert.Contains(key, said.Error, StringComparison.Ordinal);
        }

        Assert.False(Directory.Exists(record));
    }

    [Fact]
    public async Task Watch_MissingPort_NamesItAndWritesNothing()
    {
        using var folder = new TempFolder();
        var config = Path.Combine(folder.Path, "bench.json");
        await File.WriteAllTextAsync(config, """
            { "benches": [ { "name": "attic", "mains": "120 V 60 Hz", "bank": "75 W", "unit": "resistor 300 ohm",
                "meters": [ { "name": "line", "transport": { "port": "/dev/no-such-port" } } ] } ] }
            """, TestContext.Current.CancellationToken);

        var record = Path.Combine(folder.Path, "soaks");
        var said = await Cli.RunAsync("watch", "--config", config, "--record", record, "--duration", "5s");

        Assert.Equal(3, said.Code);
        Assert.Contains("There is no port /dev/no-such-port", said.Error, StringComparison.Ordinal);
        Assert.False(Directory.Exists(record));
    }

    [Theory]
    [InlineData("seconds,amps\n0,0.4\n1,0.41\n2,0,43\n", "line 4: expected 2 cells")]
    [InlineData("seconds,amps\n0,0.4\n1,four\n", "line 3: expected a number with a decimal point in column amps")]
    [InlineData("seconds,amps\n5,0.4\n1,0.4\n", "line 3: expected seconds of 0 or more that never decrease")]
    [InlineData("time;current\n", "line 1: expected the header")]
    public async Task Replay_BrokenLine_NamesFileAndLine(string text, string expected)
    {
        using var folder = new TempFolder();
        var file = Path.Combine(folder.Path, "series.csv");
        await File.WriteAllTextAsync(file, text, TestContext.Current.CancellationToken);
        var said = await Cli.RunAsync("replay", file, "--json");
        Assert.Equal(2, said.Code);
        Assert.Contains(file, said.Error, StringComparison.Ordinal);
        Assert.Contains(expected, said.Error, StringComparison.Ordinal);
        Assert.Empty(said.Output);
    }

    [Fact]
    public async Task Rehearse_UnknownScenario_SaysWhereItLooked()
    {
        var said = await Cli.RunAsync("rehearse", "no-such-evening");
        Assert.Equal(2, said.Code);
        Assert.Contains("no-such-evening.json", said.Error, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("soon")]
    [InlineData("-3s")]
    [InlineData("0m")]
    public async Task Watch_DurationThatIsNone_IsRefused(string duration)
    {
        var said = await Cli.RunAsync("watch", "--duration", duration);
        Assert.Equal(2, said.Code);
        Assert.Contains($"'{duration}' is no length of time", said.Error, StringComparison.Ordinal);
    }
}
