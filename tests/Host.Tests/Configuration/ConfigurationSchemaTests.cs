using System.Text.Json;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Tests.Configuration;

public sealed class ConfigurationSchemaTests
{
    /// <summary>Set LAMPWARDEN_WRITE_SCHEMA=1 to write the file anew after the options have changed.</summary>
    [Fact]
    public void Schema_InConfig_IsTheOneOfTheOptions()
    {
        var path = Path.Combine(Repository.Root, "config", "bench.schema.json");
        if (Environment.GetEnvironmentVariable("LAMPWARDEN_WRITE_SCHEMA") == "1")
        {
            File.WriteAllText(path, ConfigurationSchema.Text());
        }

        Assert.Equal(ConfigurationSchema.Text(), File.ReadAllText(path));
    }

    [Fact]
    public void Schema_StatesRangesAndWords()
    {
        var lamp = JsonDocument.Parse(ConfigurationSchema.Text()).RootElement.GetProperty("properties").GetProperty("lamps").GetProperty("items").GetProperty("properties");
        Assert.Equal(2000, lamp.GetProperty("ratedWatts").GetProperty("maximum").GetDouble());
        Assert.Contains("vacuum", lamp.GetProperty("fill").GetProperty("enum").EnumerateArray().Select(word => word.GetString()));
    }

    [Fact]
    public void Example_InConfig_PassesEveryRule() =>
        Assert.Single(ConfigurationFile.Load(Path.Combine(Repository.Root, "config", "bench.json")).Benches);
}
