using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Tests.Commands;

public sealed class PredictChooseTests : IDisposable
{
    private readonly DirectoryInfo folder = Directory.CreateTempSubdirectory("lampwarden-predict-");

    public void Dispose() => folder.Delete(true);

    [Fact]
    public async Task Predict_Json_HasTheContractsNames()
    {
        var (exit, output, _) = await RunAsync("predict", "--mains", "120 V 60 Hz", "--bank", "60 W + 40 W", "--unit", "lamp 100 W", "--json");
        Assert.Equal(0, exit);
        var root = JsonDocument.Parse(output).RootElement;
        Assert.Equal(120, root.GetProperty("mains").GetProperty("volts").GetDouble());
        Assert.Equal("60 W + 40 W", root.GetProperty("bank").GetProperty("text").GetString());
        var steady = root.GetProperty("steady");
        foreach (var name in new[] { "lineAmps", "bankVolts", "unitVolts", "unitWatts", "powerFactor" })
        {
            Assert.Equal(JsonValueKind.Number, steady.GetProperty(name).ValueKind);
        }

        Assert.Equal(2, steady.GetProperty("lamps").GetArrayLength());
        foreach (var name in new[] { "peakAmps", "firstCycleRmsAmps", "settleSeconds", "firstReadingAmps" })
        {
            Assert.Equal(JsonValueKind.Number, root.GetProperty("inrush").GetProperty(name).ValueKind);
        }

        Assert.True(root.GetProperty("intervals").GetProperty("steady.lineAmps").GetProperty("low").GetDouble() < steady.GetProperty("lineAmps").GetDouble());
    }

    [Fact]
    public async Task Predict_BankTooSmall_AnswersNoWithNulls()
    {
        var (exit, output, _) = await RunAsync("predict", "--mains", "120 V 60 Hz", "--bank", "60 W", "--unit", "switch-mode 40 W", "--json");
        Assert.Equal(1, exit);
        var steady = JsonDocument.Parse(output).RootElement.GetProperty("steady");
        Assert.False(steady.GetProperty("exists").GetBoolean());
        Assert.Equal(JsonValueKind.Null, steady.GetProperty("lineAmps").ValueKind);
        Assert.NotEqual("", steady.GetProperty("note").GetString());
    }

    [Theory]
    [InlineData("sheet.png", 0x89, 0x50)]
    [InlineData("sheet.svg", '<', '?')]
    public async Task Predict_Picture_WritesTheSheet(string name, int first, int second)
    {
        var file = Path.Combine(folder.FullName, name);
        var (exit, _, _) = await RunAsync("predict", "--mains", "230 V 50 Hz", "--bank", "60 W || 40 W", "--unit", "rectifier 45 W 100 uF", "--picture", file);
        Assert.Equal(0, exit);
        var bytes = await File.ReadAllBytesAsync(file, TestContext.Current.CancellationToken);
        Assert.True(bytes.Length > 20_000);
        Assert.Equal((first, second), (bytes[0], bytes[1]));
    }

    [Theory]
    [InlineData("--picture", "sheet.gif", ".svg or .png")]
    [InlineData("--meter-coupling", "dc", "ac or ac+dc")]
    [InlineData("--meter-response", "peak", "true-rms or mean")]
    [InlineData("--meter-window", "0", "0.001 to 10")]
    public async Task Predict_BadOption_SaysWhatIsExpected(string option, string value, string expected)
    {
        var (exit, output, error) = await RunAsync("predict", "--mains", "120 V 60 Hz", "--bank", "60 W", "--unit", "short", option, value);
        Assert.Equal(2, exit);
        Assert.Equal("", output);
        Assert.Contains(option, error, StringComparison.Ordinal);
        Assert.Contains(expected, error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Choose_Json_RanksAndPlans()
    {
        var (exit, output, _) = await RunAsync("choose", "--mains", "120 V 60 Hz", "--unit", "rectifier 45 W 470 uF", "--lamps", "25 W, 75 W, 75 W, 150 W", "--json");
        Assert.Equal(0, exit);
        var root = JsonDocument.Parse(output).RootElement;
        var best = root.GetProperty("choices")[0];
        Assert.Equal("fits", best.GetProperty("verdict").GetString());
        Assert.True(best.GetProperty("exists").GetBoolean());
        foreach (var name in new[] { "lineAmps", "unitVolts", "unitVoltsShare", "shortedAmps", "contrast" })
        {
            Assert.True(best.GetProperty(name).GetDouble() > 0);
        }

        var step = root.GetProperty("bringUp")[0];
        Assert.True(step.GetProperty("expectLowAmps").GetDouble() < step.GetProperty("expectHighAmps").GetDouble());
        Assert.True(step.GetProperty("expectHighAmps").GetDouble() < step.GetProperty("stopAboveAmps").GetDouble());
    }

    [Theory]
    [InlineData("25 W, -5 W", "1 to 2000 W")]
    [InlineData("25 W || 40 W", "more than one lamp")]
    [InlineData("south", "inventory")]
    public async Task Choose_BadLamps_SaysWhatIsExpected(string lamps, string expected)
    {
        var (exit, _, error) = await RunAsync("choose", "--mains", "120 V 60 Hz", "--unit", "short", "--lamps", lamps);
        Assert.Equal(2, exit);
        Assert.Contains(expected, error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Choose_NothingRunsTheUnit_AnswersNo()
    {
        var (exit, _, _) = await RunAsync("choose", "--mains", "120 V 60 Hz", "--unit", "switch-mode 100 W", "--lamps", "25 W, 40 W");
        Assert.Equal(1, exit);
    }

    private static async Task<(int Exit, string Output, string Error)> RunAsync(params string[] args)
    {
        var (output, error) = (new StringWriter(), new StringWriter());
        var exit = await CommandLine.RunAsync(args, output, error);
        return (exit, output.ToString(), error.ToString());
    }
}
