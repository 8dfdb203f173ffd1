using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using static Lampwarden.Host.Tests.Recording.ExchangeTests;

namespace Lampwarden.Host.Tests.Recording;

public sealed class RunsCommandTests : IDisposable
{
    private readonly TempFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Runs_Json_IsTheContractsList()
    {
        var run = await RecordAsync(0.40, 1);
        var (code, output, _) = await CliAsync("runs", "--record", _folder.Path, "--json", "--verdict", "passed", "--from", "2026-04-01");
        Assert.Equal(0, code);
        var only = Assert.Single(JsonDocument.Parse(output).RootElement.EnumerateArray());
        Assert.Equal(run, only.GetProperty("run").GetString());
        Assert.Equal("passed", only.GetProperty("verdict").GetString());
        Assert.Equal(3000, only.GetProperty("readings").GetInt64());
        foreach (var name in new[] { "bench", "unit", "startedUtc", "endedUtc", "findings" })
        {
            Assert.True(only.TryGetProperty(name, out _), name);
        }
    }

    [Theory]
    [InlineData("--verdict", "good", "expected passed, failed or incomplete")]
    [InlineData("--from", "yesterday", "expected UTC such as 2026-04-02")]
    public async Task Runs_BadFilter_SaysWhatIsExpected(string option, string value, string told)
    {
        await RecordAsync(0.40, 1);
        var (code, _, error) = await CliAsync("runs", "--record", _folder.Path, option, value);
        Assert.Equal(2, code);
        Assert.Contains(told, error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Runs_NoStore_SaysWhereItLooked()
    {
        var (code, _, error) = await CliAsync("runs", "--record", _folder.Path);
        Assert.Equal(3, code);
        Assert.Contains($"There is no record in {_folder.Path}", error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Compare_UnitThatTakesMore_IsTold()
    {
        var (first, second) = (await RecordAsync(0.40, 1), await RecordAsync(0.46, 2));
        var (code, output, _) = await CliAsync("compare", first, second, "--record", _folder.Path, "--json");
        Assert.Equal(0, code);
        var root = JsonDocument.Parse(output).RootElement;
        var settled = root.GetProperty("figures").EnumerateArray().Single(figure => figure.GetProperty("name").GetString() == "settled");
        Assert.Equal(15, settled.GetProperty("differencePercent").GetDouble(), 0.2);
        Assert.Contains("the unit's: it loads the bank more", root.GetProperty("remarks")[0].GetString(), StringComparison.Ordinal);
    }

    [Fact]
    public async Task Replay_StoredRun_IsThatOfItsExport()
    {
        var run = await RecordAsync(0.40, 1);
        var file = Path.Combine(_folder.Path, "run.csv");
        await CliAsync("export", run, "--record", _folder.Path, "--output", file);
        var stored = await CliAsync("replay", run, "--record", _folder.Path, "--json");
        var exported = await CliAsync("replay", file, "--json");
        Assert.Equal(0, stored.Code);
        Assert.Equal(exported.Output, stored.Output);
        Assert.Equal(3000, JsonDocument.Parse(stored.Output).RootElement.GetProperty("readings").GetInt64());
    }

    [Fact]
    public async Task Note_WithAPhotograph_IsKeptAndAMissingFileKeepsNothing()
    {
        var run = await RecordAsync(0.40, 1);
        var photo = Path.Combine(_folder.Path, "cap.jpg");
        await File.WriteAllBytesAsync(photo, [1, 2, 3]);
        Assert.Equal(2, (await CliAsync("note", run, "bulges", "--attach", photo, "--attach", photo + "x", "--record", _folder.Path)).Code);
        Assert.Equal(0, (await CliAsync("note", run, "bulges", "--by", "Ada", "--attach", photo, "--record", _folder.Path)).Code);
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        Assert.Equal(("Ada", "bulges"), (Assert.Single(store.Run(run).Notes).Author, store.Run(run).Notes[0].Text));
        Assert.Equal("image/jpeg", Assert.Single(store.Run(run).Attachments).MediaType);
    }

    // An inrush of 1.2 A that falls to the steady current within two seconds.
    private async Task<string> RecordAsync(double steadyAmps, int hour)
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await store.BeginRunAsync(SoakStoreTests.Start() with { StartedUtc = new DateTimeOffset(2026, 4, 2, hour, 0, 0, TimeSpan.Zero) });
        var random = new Random(hour);
        for (var i = 0; i < 3000; i++)
        {
            run.Append(new LineReading(i * 0.5, Math.Round(steadyAmps + ((1.2 - steadyAmps) * Math.Exp(-i * 1.5)) + (random.NextDouble() * 1e-4), 4), 4, 120, 1));
        }

        await run.EndAsync(new RunEnd(Verdict.Passed, []));
        return run.Run;
    }
}
