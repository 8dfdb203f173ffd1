using System.Text.Json;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Tests.Configuration;

public sealed class ConfigurationFileTests : IDisposable
{
    private const string Good = """
        {
          // comments are allowed
          "lamps": [ { "name": "amber", "ratedWatts": 75, "ratedVolts": 130, "fill": "gas" } ],
          "benches": [ { "name": "attic", "mains": "120 V 60 Hz", "bank": "amber || 25 W", "unit": "resistor 300 ohm",
            "meters": [ { "name": "line", "transport": { "kind": "tcp", "port": "5025" }, "readingsPerSecond": 5 } ] } ]
        }
        """;

    private readonly string _file = Path.Combine(Path.GetTempPath(), $"lampwarden-{Guid.NewGuid():N}.json");

    public void Dispose() => File.Delete(_file);

    [Fact]
    public void Load_GoodFile_FillsKeysAndKeepsDefaults()
    {
        var options = Load(Good);

        var bench = Assert.Single(options.Benches);
        Assert.Equal("amber || 25 W", bench.Bank);
        Assert.Equal(5, bench.Meters[0].ReadingsPerSecond);
        Assert.Equal(12, bench.Soak.PlannedHours);
        Assert.Equal("soaks", options.Recording.Folder);
        Assert.Equal(130, options.Lamps[0].RatedVolts);
    }

    [Fact]
    public void Load_FiveFaults_ReportsAllFiveWithKeyValueAndRule()
    {
        var error = Assert.Throws<ConfigurationException>(() => Load("""
            {
              "lamps": [ { "name": "amber", "ratedWatts": -5, "ratedVolts": 120 } ],
              "benches": [ { "name": "attic", "mains": "120 V 60 Hz", "bank": "25 W ||", "unit": "resistor 300 ohm",
                "meters": [ { "name": "line", "transport": { "kind": "pigeon", "port": "5025" }, "readingsPerSecond": "fast", "colour": "red" } ] } ]
            }
            """));

        Assert.Equal(
            ["benches[0].bank", "benches[0].meters[0].colour", "benches[0].meters[0].readingsPerSecond", "benches[0].meters[0].transport.kind", "lamps[0].ratedWatts"],
            error.Faults.Select(fault => fault.Key).Order(StringComparer.Ordinal));
        Assert.Contains("lamps[0].ratedWatts is '-5': must lie between 1 and 2000", error.Message, StringComparison.Ordinal);
        Assert.Contains("benches[0].meters[0].readingsPerSecond is 'fast': expected a number", error.Message, StringComparison.Ordinal);
        Assert.Contains("no such key; expected one of name,", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Load_EnvironmentVariable_OverridesTheFile()
    {
        Environment.SetEnvironmentVariable("LAMPWARDEN__BENCHES__0__SOAK__PLANNEDHOURS", "3.5");
        try
        {
            Assert.Equal(3.5, Load(Good).Benches[0].Soak.PlannedHours);
        }
        finally
        {
            Environment.SetEnvironmentVariable("LAMPWARDEN__BENCHES__0__SOAK__PLANNEDHOURS", null);
        }
    }

    [Fact]
    public void Load_Inventory_GoesWithEachBenchIntoItsRecord()
    {
        var stored = JsonSerializer.Serialize(Load(Good).Benches[0], Lampwarden.Host.Commands.Json.Compact);
        var read = JsonSerializer.Deserialize<BenchOptions>(stored, Lampwarden.Host.Commands.Json.Compact)!;
        Assert.Equal(130, Assert.Single(read.Inventory).RatedVolts);
        Assert.Equal(75, Lampwarden.Host.Soaking.BenchPlan.From(read, Lampwarden.Host.Soaking.Inventory.Of(read.Inventory)).Bank.Lamps[0].RatedWatts);
    }

    [Fact]
    public void Load_NotJson_NamesTheFileAndTheLine()
    {
        var error = Assert.Throws<ConfigurationException>(() => Load("{\n \"benches\": [ }"));
        Assert.Contains(_file, error.Message, StringComparison.Ordinal);
        Assert.Contains("line 2, column 15", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Load_MissingFile_SaysWhatToDo()
    {
        var error = Assert.Throws<ConfigurationException>(() => ConfigurationFile.Load("/nowhere/bench.json"));
        Assert.Contains("--config", error.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("\"quantity\": \"mainsVoltage\"", "exactly one meter must measure lineCurrent; 0 do")]
    [InlineData("\"protocol\": { \"kind\": \"lines\", \"pattern\": \"([0-9\" }", "Unterminated [] set")]
    [InlineData("\"protocol\": { \"query\": \"READ\" }", "must be a question, such as READ?")]
    public void Load_RuleAcrossKeys_IsStated(string meterKey, string expected)
    {
        var error = Assert.Throws<ConfigurationException>(() => Load(Good.Replace("\"readingsPerSecond\": 5", meterKey, StringComparison.Ordinal)));
        Assert.Contains(expected, error.Message, StringComparison.Ordinal);
    }

    private LampwardenOptions Load(string json)
    {
        File.WriteAllText(_file, json);
        return ConfigurationFile.Load(_file);
    }
}
