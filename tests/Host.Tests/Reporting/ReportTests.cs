using System.Diagnostics;
using System.Text.RegularExpressions;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Packing;
using Lampwarden.Host.Reporting;
using Lampwarden.Host.Reporting.Pdf;
using Lampwarden.Host.Tests.Recording;
using static Lampwarden.Host.Tests.Recording.ExchangeTests;

namespace Lampwarden.Host.Tests.Reporting;

public sealed class ReportTests : IDisposable
{
    private const string Prediction =
        """{"steady":{"exists":true,"lineAmps":0.41,"unitVolts":98.4,"unitWatts":34.1},"inrush":{"firstReadingAmps":1.4,"settleSeconds":1.9},"band":{"lowAmps":0.38,"highAmps":0.45},"shorted":{"lineAmps":0.83}}""";

    private readonly TempFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Html_IsSelfContainedAndEncodesWhatPeopleType()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await RecordAsync(store, label: "<b>Job</b> & \"co\"");
        var html = HtmlReport.Write(ReportBuilder.Build(store, run, DateTimeOffset.UnixEpoch), Paper.A4);
        Assert.DoesNotContain("<b>Job", html, StringComparison.Ordinal);
        Assert.Contains("&lt;b&gt;Job&lt;/b&gt; &amp;", html, StringComparison.Ordinal);
        Assert.DoesNotMatch(new Regex("(src|href)=\"(?!data:)"), html);
        Assert.DoesNotContain("url(", html, StringComparison.Ordinal);
        foreach (var told in new[] { "FAILED", "developing-short", "The whole soak", "does not isolate", "inside the band", "no-answer", "acknowledged", "smelt warm", "Ada" })
        {
            Assert.Contains(told, html, StringComparison.Ordinal);
        }
    }

    [Fact]
    public async Task Build_FromFiguresOfTheRun_SaysWhatWasSeen()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await RecordAsync(store);
        var seen = ReportBuilder.Build(store, run, DateTimeOffset.UnixEpoch).Sections.Single(section => section.Heading == "Predicted and seen");
        var rows = ((ReportTable)seen.Blocks[0]).Rows.ToDictionary(row => row[0], row => row);
        Assert.Equal(["first reading after switch-on", "1.4000 A", "1.2000 A"], rows["first reading after switch-on"].Take(3));
        Assert.Equal(["settled, first ten minutes", "0.4100 A", "0.4202 A"], rows["settled, first ten minutes"].Take(3));
        Assert.Equal("0.4200 A", rows["at the end, last ten minutes"][2]);
        Assert.Contains("inside the band", rows["settled, first ten minutes"][3], StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("a4", "595")]
    [InlineData("letter", "612 x 792 pts (letter)")]
    public async Task Pdf_HasThePaperAskedForAndTheWordsOfTheHtml(string paper, string size)
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await RecordAsync(store);
        var (code, _, error) = await CliAsync("report", run, "--record", _folder.Path, "--output", _folder.Path, "--paper", paper, "--sign", "Ada Example");
        Assert.True(code == 0, error);
        var pdf = Path.Combine(_folder.Path, $"soak-{run}.pdf");
        Assert.Contains(size, Run(Outside.Program("pdfinfo"), pdf), StringComparison.Ordinal);
        var text = Run(Outside.Program("pdftotext"), "-layout", pdf, "-");
        foreach (var told in new[] { "Soak record", "FAILED", "developing-short", "page 1 of", "Ada Example", "does not isolate", "EN 50678", "SHA-256 of the readings" })
        {
            Assert.Contains(told, text, StringComparison.Ordinal);
        }
    }

    [Fact]
    public async Task Verify_AfterOneReadingIsAltered_Fails()
    {
        string run;
        using (var store = SoakStore.Open(_folder.Path, TimeProvider.System))
        {
            run = await RecordAsync(store);
        }

        await CliAsync("report", run, "--record", _folder.Path, "--output", _folder.Path);
        foreach (var kind in new[] { "pdf", "html" })
        {
            Assert.Equal(0, (await CliAsync("report", run, "--record", _folder.Path, "--verify", Path.Combine(_folder.Path, $"soak-{run}.{kind}"))).Code);
        }

        AlterOneReading();
        foreach (var kind in new[] { "pdf", "html" })
        {
            var (code, output, _) = await CliAsync("report", run, "--record", _folder.Path, "--verify", Path.Combine(_folder.Path, $"soak-{run}.{kind}"));
            Assert.Equal(1, code);
            Assert.Contains("NOT those", output, StringComparison.Ordinal);
        }
    }

    [Fact]
    public async Task Digest_IsThatOfTheExportedFile()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await RecordAsync(store);
        var file = Path.Combine(_folder.Path, "run.csv");
        await CliAsync("export", run, "--record", _folder.Path, "--output", file);
        Assert.Equal(Convert.ToHexStringLower(System.Security.Cryptography.SHA256.HashData(await File.ReadAllBytesAsync(file))), ReadingsDigest.Of(store, run));
    }

    [Fact]
    public async Task Verify_FileWithoutACheckSum_IsBadInput()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await RecordAsync(store);
        var file = Path.Combine(_folder.Path, "shopping.txt");
        await File.WriteAllTextAsync(file, "milk");
        var (code, _, error) = await CliAsync("report", run, "--record", _folder.Path, "--verify", file);
        Assert.Equal(2, code);
        Assert.Contains("carries no check sum", error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Build_ResistorBehindALamp_SaysItsVoltsAndWattsWithIntervals()
    {
        // 120 V through a plain 100-ohm resistor in the lamp's place and a unit of 50 ohm: 0.8 A, 40 V and 32 W by Ohm's law.
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await store.BeginRunAsync(SoakStoreTests.Start() with { Bank = "100 ohm", Unit = "resistor 50 ohm" });
        for (var i = 0; i < 1000; i++)
        {
            run.Append(new LineReading(i, 0.8, 4, 120, 1));
        }

        await run.EndAsync(new RunEnd(Verdict.Passed, []));
        var seen = ReportBuilder.Build(store, run.Run, DateTimeOffset.UnixEpoch).Sections.Single(section => section.Heading == "Predicted and seen");
        var rows = ((ReportTable)seen.Blocks[0]).Rows.ToDictionary(row => row[0], row => row);
        Assert.Equal("40.0 V", rows["across the unit, settled"][2]);
        Assert.Equal("32.0 W", rows["power of the unit, at the end"][2]);
        Assert.Matches(@"^3\d\.\d V to 4\d\.\d V$", rows["across the unit, settled"][3]);
    }

    [Fact]
    public async Task Build_TimeThatNobodyPolled_IsNotCalledWatched()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await store.BeginRunAsync(SoakStoreTests.Start());
        for (var i = 0; i < 200; i++)
        {
            run.Append(new LineReading((i * 0.5) + (i < 100 ? 0 : 30), 0.4, 4));
        }

        await run.EndAsync(new RunEnd(Verdict.Passed, []));
        var gaps = ReportBuilder.Build(store, run.Run, DateTimeOffset.UnixEpoch).Sections.Single(section => section.Heading == "Time without readings");
        var row = Assert.Single(gaps.Blocks.OfType<ReportTable>().Single().Rows);
        Assert.Equal(["0:00:49", "0:01:20", "30.5 s", "not-polled"], row.Take(4));
    }

    [Fact]
    public async Task Build_RunThatCarriesOnAnother_SpeaksOfItsOwnTimeOnly()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var earlier = await RecordAsync(store, verdict: Verdict.Incomplete);
        var start = SoakStoreTests.Start() with { PredictionJson = Prediction, StartedUtc = store.Run(earlier).Info.StartedUtc, ResumedFrom = earlier };
        var run = await store.BeginRunAsync(start);
        run.AppendMissed(4099, "service-down");
        for (var i = 4100; i < 6000; i++)
        {
            run.Append(new LineReading(i, 0.42, 4));
        }

        await run.EndAsync(new RunEnd(Verdict.Passed, []));
        var content = ReportBuilder.Build(store, run.Run, DateTimeOffset.UnixEpoch);
        Assert.DoesNotContain(content.Sections, section => section.Heading == "Switch-on");
        var seen = ((ReportTable)content.Sections.Single(section => section.Heading == "Predicted and seen").Blocks[0]).Rows;
        Assert.Equal(Said.Unknown, seen[0][2]);
        Assert.Equal("0.4200 A", seen[1][2]);
        var gap = Assert.Single(content.Sections.Single(section => section.Heading == "Time without readings").Blocks.OfType<ReportTable>().Single().Rows);
        Assert.Equal(["1:06:41", "1:08:20", "1 min 39 s", "service-down"], gap.Take(4));
    }

    [Theory]
    [InlineData("ReturnedUnacknowledged", "returned unacknowledged")]
    [InlineData("returned-unacknowledged", "returned unacknowledged")]
    public void Words_OfAState_AreWords(string name, string told) => Assert.Equal(told, Said.Words(name));

    [Fact]
    public async Task Report_OfARunGoingOnOrEmpty_IsStillWritten()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await store.BeginRunAsync(SoakStoreTests.Start() with { PredictionJson = null });
        var content = ReportBuilder.Build(store, run.Run, DateTimeOffset.UnixEpoch);
        Assert.Equal("GOING ON", content.Verdict);
        using var stream = new MemoryStream();
        PdfReport.Write(stream, content, Paper.A4);
        Assert.True(stream.Length > 1000);
    }

    // What somebody with a database tool and this program's source could do: the chunk is whole, its check sum fits, one digit is not the meter's.
    private void AlterOneReading()
    {
        using var connection = new StoreFile(Path.Combine(_folder.Path, SoakStore.FileName)).Connect(Microsoft.Data.Sqlite.SqliteOpenMode.ReadWrite);
        using var command = connection.CreateCommand();
        command.CommandText = "SELECT data FROM chunks ORDER BY run, first LIMIT 1";
        var readings = ReadingChunk.Unpack((byte[])command.ExecuteScalar()!);
        readings[700] = new LineReading(readings[700].Seconds, readings[700].Amps + 0.0001, 4, readings[700].MainsVolts, 1);
        command.CommandText = "UPDATE chunks SET data=$data";
        command.Parameters.AddWithValue("$data", ReadingChunk.Pack(readings));
        Assert.Equal(1, command.ExecuteNonQuery());
    }

    internal static async Task<string> RecordAsync(SoakStore store, string? label = "job 1207", double amps = 0.42, Verdict verdict = Verdict.Failed, string? bank = null)
    {
        var start = SoakStoreTests.Start() with { UnitLabel = label, PredictionJson = Prediction, StartedUtc = new DateTimeOffset(2026, 4, 2, 8, 0, 0, TimeSpan.Zero) };
        var run = await store.BeginRunAsync(bank is null ? start : start with { Bank = bank });
        for (var i = 0; i < 4000; i++)
        {
            run.Append(new LineReading(i, Math.Round(amps + ((1.2 - amps) * Math.Exp(-i)), 4), 4, 120, 1));
        }

        run.AppendMissed(4000, "no-answer", "nothing in 1 s");
        run.Append(new LineReading(4001, amps, 4, 120, 1));
        if (verdict == Verdict.Failed)
        {
            var finding = new Finding(1, Signature.DevelopingShort, Severity.Critical, 3000, 3300, null, "It creeps: look at the rectifier.", new Dictionary<string, double>());
            run.AppendFinding(3300, new FindingChange(ChangeKind.Raised, finding));
            run.AppendAlert(new StoredAlertChange(3300, DateTimeOffset.UnixEpoch, "1", "raised", "unacknowledged"));
            run.AppendAlert(new StoredAlertChange(3400, DateTimeOffset.UnixEpoch, "1", "acknowledged", "acknowledged", "Ada"));
        }

        await run.EndAsync(new RunEnd(verdict, ["A developing short was found."]));
        await store.AddNoteAsync(run.Run, "smelt warm", "Ada");
        return run.Run;
    }

    private static string Run(string program, params string[] arguments)
    {
        using var process = Process.Start(new ProcessStartInfo(program, arguments) { RedirectStandardOutput = true })!;
        var text = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        Assert.Equal(0, process.ExitCode);
        return text;
    }
}
