using System.Globalization;
using DuckDB.NET.Data;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Exchange;

namespace Lampwarden.Host.Tests.Recording;

public sealed class ExchangeTests : IDisposable
{
    private readonly TempFolder _here = new();
    private readonly TempFolder _there = new();

    public void Dispose()
    {
        _here.Dispose();
        _there.Dispose();
    }

    [Theory]
    [InlineData("csv")]
    [InlineData("parquet")]
    [InlineData("archive")]
    public async Task Export_Import_Export_GivesTheSameBytes(string format)
    {
        var run = await RecordAsync();
        var file = Path.Combine(_here.Path, "carried");
        var first = await ExportAsync(_here, run, "csv", Path.Combine(_here.Path, "first.csv"));
        await ExportAsync(_here, run, format, file);
        var (code, output, error) = await CliAsync("import", file, "--record", _there.Path, "--json");
        Assert.True(code == 0, error);
        using var there = SoakStore.Open(_there.Path, TimeProvider.System, StoreMode.Review);
        var imported = Assert.Single(there.Runs());
        Assert.Contains(imported.Run, output, StringComparison.Ordinal);
        Assert.Equal(first, await ExportAsync(_there, imported.Run, "csv", Path.Combine(_there.Path, "second.csv")));
        Assert.Equal(format == "csv" ? Verdict.Incomplete : Verdict.Passed, imported.Verdict);
    }

    [Fact]
    public async Task Import_Archive_BringsTheWholeRunUnderItsId()
    {
        var run = await RecordAsync();
        var file = Path.Combine(_here.Path, "run.zip");
        await ExportAsync(_here, run, "archive", file);
        await CliAsync("import", file, "--record", _there.Path);
        await CliAsync("import", file, "--record", _there.Path);
        using var here = SoakStore.Open(_here.Path, TimeProvider.System, StoreMode.Review);
        using var there = SoakStore.Open(_there.Path, TimeProvider.System, StoreMode.Review);
        Assert.Equal(here.Attachment(run, "cap.jpg"), there.Attachment(run, "cap.jpg"));
        Assert.Equal(RunArchive.ToJson(here.Run(run)), RunArchive.ToJson(there.Run(run)));
        Assert.Equal(2, there.Runs().Count);
    }

    [Fact]
    public async Task Parquet_ReadByDuckDb_GivesTheSameSums()
    {
        var run = await RecordAsync();
        var file = Path.Combine(_here.Path, "run.parquet");
        await ExportAsync(_here, run, "parquet", file);
        using var store = SoakStore.Open(_here.Path, TimeProvider.System, StoreMode.Review);
        var readings = store.Readings(run).ToList();
        await using var connection = new DuckDBConnection("DataSource=:memory:");
        connection.Open();
        await using var command = connection.CreateCommand();
        command.CommandText = $"SELECT count(*), count(amps), sum(amps), sum(volts), max(seconds), count(*) FILTER (WHERE overload) FROM read_parquet('{file}')";
        await using var row = await command.ExecuteReaderAsync();
        Assert.True(row.Read());
        var finite = readings.Where(reading => double.IsFinite(reading.Amps)).ToList();
        Assert.Equal(readings.Count, Convert.ToInt64(row.GetValue(0), CultureInfo.InvariantCulture));
        Assert.Equal(finite.Count, Convert.ToInt64(row.GetValue(1), CultureInfo.InvariantCulture));
        Assert.Equal(finite.Sum(reading => reading.Amps), row.GetDouble(2), 1e-9);
        Assert.Equal(readings.Where(reading => double.IsFinite(reading.MainsVolts)).Sum(reading => reading.MainsVolts), row.GetDouble(3), 1e-7);
        Assert.Equal(readings[^1].Seconds, row.GetDouble(4));
        Assert.Equal(1, Convert.ToInt64(row.GetValue(5), CultureInfo.InvariantCulture));
    }

    [Theory]
    [InlineData("time,amps\n", "line 1")]
    [InlineData("seconds,amps\n0,0.4\n1,0.4x\n", "line 3: '0.4x' is no number of amps")]
    [InlineData("seconds,amps\n0,0.4,7\n", "line 2: '0,0.4,7' has 3 cells; expected 2")]
    [InlineData("seconds,amps\n5,0.4\n4,0.4\n", "line 3: the time '4' does not follow 5 s")]
    public async Task Import_BrokenSeries_NamesThePlaceAndStoresNothing(string text, string told)
    {
        var file = Path.Combine(_here.Path, "broken.csv");
        await File.WriteAllTextAsync(file, text);
        var (code, _, error) = await CliAsync("import", file, "--record", _there.Path);
        Assert.Equal(2, code);
        Assert.Contains(told, error, StringComparison.Ordinal);
        Assert.False(File.Exists(Path.Combine(_there.Path, SoakStore.FileName)));
    }

    [Fact]
    public async Task Export_UnknownRun_IsTroubleAndLeavesNoFile()
    {
        await RecordAsync();
        var file = Path.Combine(_here.Path, "out.csv");
        var (code, _, error) = await CliAsync("export", "20010101-001", "--record", _here.Path, "--output", file);
        Assert.Equal(3, code);
        Assert.Contains("There is no run '20010101-001'", error, StringComparison.Ordinal);
        Assert.False(File.Exists(file));
    }

    private async Task<string> RecordAsync()
    {
        using var store = SoakStore.Open(_here.Path, TimeProvider.System);
        var run = await store.BeginRunAsync(SoakStoreTests.Start() with { StartedUtc = new DateTimeOffset(2026, 4, 2, 8, 0, 0, TimeSpan.Zero) });
        var random = new Random(4);
        for (var i = 0; i < 20_000; i++)
        {
            run.Append(new LineReading(i * 0.1, Math.Round(0.41 + (random.NextDouble() * 0.01), i % 3 == 0 ? 4 : 6), i % 3 == 0 ? 4 : 6, 120 + (random.Next(9) / 10.0), 1));
        }

        run.AppendMissed(2000.5, "no-answer");
        run.Append(new LineReading(2001, double.PositiveInfinity));
        run.Append(new LineReading(2001.5, 1.0 / 3));
        var finding = new Finding(1, Signature.MeterSilent, Severity.Notice, 2000, 2000.5, 2001, "Silent.", new Dictionary<string, double> { ["silentSeconds"] = 0.5, ["unknownAmps"] = double.NaN });
        run.AppendFinding(2000.5, new FindingChange(ChangeKind.Cleared, finding));
        await run.EndAsync(new RunEnd(Verdict.Passed, ["All well."], """{"meanAmps":0.415}"""));
        await store.AddNoteAsync(run.Run, "a note", "Ada", 7);
        await store.AttachAsync(run.Run, "cap.jpg", "image/jpeg", [1, 2, 3]);
        return run.Run;
    }

    private static async Task<byte[]> ExportAsync(TempFolder folder, string run, string format, string file)
    {
        var (code, _, error) = await CliAsync("export", run, "--format", format, "--record", folder.Path, "--output", file);
        Assert.True(code == 0, error);
        return await File.ReadAllBytesAsync(file);
    }

    internal static async Task<(int Code, string Output, string Error)> CliAsync(params string[] args)
    {
        await using var output = new StringWriter();
        await using var error = new StringWriter();
        var code = await CommandLine.RunAsync(args, output, error);
        return (code, output.ToString(), error.ToString());
    }
}
