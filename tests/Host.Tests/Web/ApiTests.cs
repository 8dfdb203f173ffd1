using System.Net;
using System.Net.Http.Json;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Host.Tests.Web;

/// <summary>The HTTP interface: names of the JSON contract, problems that say what to do.</summary>
public sealed class ApiTests
{
    private static CancellationToken Cancellation => TestContext.Current.CancellationToken;

    [Fact]
    public async Task Predict_GoodTexts_HasTheNamesOfTheContract()
    {
        await using var page = await QuietPage.OpenAsync();

        var predicted = await GetAsync(page, "/api/predict?mains=120 V 60 Hz&bank=(75 W || 25 W) %2B 150 W&unit=resistor 240 ohm");

        string[] steady = ["exists", "lineAmps", "bankVolts", "unitVolts", "unitWatts", "powerFactor", "lamps", "note"];
        string[] lamp = ["name", "volts", "amps", "watts", "filamentKelvin", "glow", "firstGlowSeconds"];
        Assert.Superset(new HashSet<string>(["mains", "bank", "unit", "steady", "inrush", "shorted", "band", "contrast", "bankTree"]), Names(predicted));
        Assert.Superset(new HashSet<string>(steady), Names(predicted.GetProperty("steady")));
        Assert.Superset(new HashSet<string>(lamp), Names(predicted.GetProperty("steady").GetProperty("lamps")[0]));
        Assert.Superset(new HashSet<string>(["peakAmps", "firstCycleRmsAmps", "settleSeconds", "firstReadingAmps"]), Names(predicted.GetProperty("inrush")));
        var tree = predicted.GetProperty("bankTree");
        Assert.Equal("series", tree.GetProperty("kind").GetString());
        Assert.Equal(1, tree.GetProperty("parts")[0].GetProperty("parts")[1].GetProperty("index").GetInt32());
    }

    [Fact]
    public async Task Choose_ThreeLamps_HasTheNamesOfTheContractAndTheLampsOfEach()
    {
        await using var page = await QuietPage.OpenAsync();

        var chosen = await GetAsync(page, "/api/choose?mains=120 V 60 Hz&unit=resistor 240 ohm&lamps=25 W, 60 W, 100 W");

        var first = chosen.GetProperty("choices")[0];
        string[] choice = ["bank", "lineAmps", "unitVolts", "unitVoltsShare", "shortedAmps", "contrast", "exists", "verdict", "reason"];
        Assert.Superset(new HashSet<string>(choice), Names(first));
        Assert.Superset(new HashSet<string>(["bank", "expectLowAmps", "expectHighAmps", "stopAboveAmps", "why"]), Names(chosen.GetProperty("bringUp")[0]));
        var glow = (string which) => first.GetProperty(which).EnumerateArray().Max(lamp => lamp.GetProperty("glow").GetDouble());
        Assert.True(glow("shortedLamps") > 5 * glow("healthyLamps"));
    }

    [Fact]
    public async Task Predict_BadText_IsAProblemThatShowsWhere()
    {
        await using var page = await QuietPage.OpenAsync();

        using var answer = await page.Client.GetAsync(new Uri("/api/predict?mains=120 V 60 Hz&bank=60 W %2B&unit=resistor 240 ohm", UriKind.Relative), Cancellation);

        Assert.Equal(HttpStatusCode.BadRequest, answer.StatusCode);
        Assert.Equal("application/problem+json", answer.Content.Headers.ContentType?.MediaType);
        var problem = await answer.Content.ReadFromJsonAsync<JsonElement>(Cancellation);
        Assert.Equal("60 W +", problem.GetProperty("input").GetString());
        Assert.True(problem.GetProperty("position").GetInt32() >= 4);
    }

    [Theory]
    [InlineData("/api/benches/nowhere", HttpStatusCode.NotFound)]
    [InlineData("/api/benches/nowhere/trace", HttpStatusCode.NotFound)]
    [InlineData("/api/runs/20200101-001", HttpStatusCode.NotFound)]
    [InlineData("/api/runs/20200101-001/series", HttpStatusCode.NotFound)]
    [InlineData("/api/runs?verdict=splendid", HttpStatusCode.BadRequest)]
    [InlineData("/api/runs/20200101-001/export", HttpStatusCode.NotFound)]
    [InlineData("/api/runs/20200101-001/report?format=docx", HttpStatusCode.BadRequest)]
    [InlineData("/api/predict?mains=120 V 60 Hz", HttpStatusCode.BadRequest)]
    [InlineData("/api/nothing", HttpStatusCode.NotFound)]
    public async Task Get_WhatCannotBe_IsAProblem(string path, HttpStatusCode status)
    {
        await using var page = await QuietPage.OpenAsync();

        using var answer = await page.Client.GetAsync(new Uri(path, UriKind.Relative), Cancellation);

        Assert.Equal(status, answer.StatusCode);
        Assert.Equal("application/problem+json", answer.Content.Headers.ContentType?.MediaType);
    }

    [Fact]
    public async Task Post_NoJson_IsAProblemWithoutTheInsides()
    {
        await using var page = await QuietPage.OpenAsync();

        using var answer = await page.Client.PostAsync(new Uri("/api/benches/attic/soak", UriKind.Relative), new StringContent("{\"unit\":", System.Text.Encoding.UTF8, "application/json"), Cancellation);

        Assert.Equal(HttpStatusCode.BadRequest, answer.StatusCode);
        Assert.DoesNotContain("   at ", await answer.Content.ReadAsStringAsync(Cancellation), StringComparison.Ordinal);
    }

    [Fact]
    public async Task OpenApi_NamesEveryPathAndTheNamesOfTheContract()
    {
        await using var page = await QuietPage.OpenAsync();

        var document = await GetAsync(page, "/api/openapi.json");

        string[] expected =
        [
            "/api/benches", "/api/benches/{bench}", "/api/benches/{bench}/trace", "/api/benches/{bench}/soak", "/api/benches/{bench}/soak/end",
            "/api/benches/{bench}/announcements", "/api/benches/{bench}/notes", "/api/benches/{bench}/bring-up/next", "/api/benches/{bench}/bring-up/leave",
            "/api/benches/{bench}/alerts/{number}/acknowledge", "/api/benches/{bench}/alerts/{number}/shelve", "/api/benches/{bench}/alerts/{number}/unshelve",
            "/api/benches/{bench}/alerts/{number}/reset", "/api/predict", "/api/choose", "/api/bring-up", "/api/runs", "/api/runs/{run}", "/api/runs/{run}/series", "/api/runs/{run}/export", "/api/runs/{run}/report",
            "/api/meters", "/api/watcher/alerts", "/api/watcher/alerts/{number}/acknowledge", "/api/events", "/api/session",
        ];
        Assert.Superset(new HashSet<string>(expected), Names(document.GetProperty("paths")));
        var steady = document.GetProperty("components").GetProperty("schemas").GetProperty("SteadyState").GetProperty("properties");
        Assert.Contains("lineAmps", Names(steady));
        foreach (var path in document.GetProperty("paths").EnumerateObject())
        {
            foreach (var operation in path.Value.EnumerateObject())
            {
                Assert.False(string.IsNullOrEmpty(operation.Value.GetProperty("summary").GetString()), path.Name);
            }
        }
    }

    [Fact]
    public async Task Runs_OneStored_IsListedDescribedAndDrawnWithItsGap()
    {
        await using var page = await QuietPage.OpenAsync();
        var run = await StoreRunAsync(page.Store);

        var list = await GetAsync(page, "/api/runs?unit=resistor&verdict=failed");
        var one = await GetAsync(page, $"/api/runs/{run}");
        var series = await GetAsync(page, $"/api/runs/{run}/series?points=50");

        Assert.Equal(run, Assert.Single(list.EnumerateArray().ToList()).GetProperty("run").GetString());
        Assert.Equal("resistor 300 ohm", one.GetProperty("unit").GetString());
        Assert.Equal("no-answer", one.GetProperty("gaps")[0].GetProperty("reason").GetString());
        var low = series.GetProperty("lowAmps").EnumerateArray().ToList();
        Assert.Single(low, value => value.ValueKind == JsonValueKind.Null);
        Assert.InRange(low.Count, 20, 51);
        var seconds = series.GetProperty("seconds").EnumerateArray().Select(value => value.GetDouble()).ToList();
        Assert.Equal(seconds.Order(), seconds);
    }

    [Theory]
    [InlineData("export?format=csv", "text/csv", "seconds,amps")]
    [InlineData("export?format=parquet", "application/vnd.apache.parquet", "PAR1")]
    [InlineData("export?format=archive", "application/zip", "PK")]
    [InlineData("report?format=pdf", "application/pdf", "%PDF")]
    [InlineData("report?format=html", "text/html", "<!")]
    public async Task TakeAway_EachFormat_IsAFileOfItsKind(string path, string type, string start)
    {
        await using var page = await QuietPage.OpenAsync();
        var run = await StoreRunAsync(page.Store);

        using var answer = await page.Client.GetAsync(new Uri($"/api/runs/{run}/{path}", UriKind.Relative), Cancellation);

        Assert.Equal(HttpStatusCode.OK, answer.StatusCode);
        Assert.Equal(type, answer.Content.Headers.ContentType?.MediaType);
        Assert.Equal("attachment", answer.Content.Headers.ContentDisposition?.DispositionType);
        Assert.StartsWith(start, System.Text.Encoding.Latin1.GetString(await answer.Content.ReadAsByteArrayAsync(Cancellation)), StringComparison.Ordinal);
    }

    [Fact]
    public async Task Series_FinerThanTheReadings_DrawsNoGapBetweenThem()
    {
        await using var page = await QuietPage.OpenAsync();
        var run = await StoreRunAsync(page.Store);

        var series = await GetAsync(page, $"/api/runs/{run}/series?fromSeconds=10&toSeconds=20&points=1000");

        Assert.DoesNotContain(series.GetProperty("lowAmps").EnumerateArray(), value => value.ValueKind == JsonValueKind.Null);
        Assert.Equal(10, series.GetProperty("seconds").GetArrayLength());
    }

    [Fact]
    public async Task Page_FromAnyFolder_ServesItsFilesWithTheirTypes()
    {
        await using var page = await QuietPage.OpenAsync();

        Assert.Equal("text/html", await TypeAsync(page, "/"));
        Assert.Equal("text/javascript", await TypeAsync(page, "/model/numbers.js"));
        Assert.Equal("text/css", await TypeAsync(page, "/app.css"));
        using var outside = await page.Client.GetAsync(new Uri("/../appsettings.json", UriKind.Relative), Cancellation);
        Assert.Equal(HttpStatusCode.NotFound, outside.StatusCode);
    }

    [Fact]
    public async Task Page_NamesNoOtherHost()
    {
        await using var page = await QuietPage.OpenAsync();
        var root = Path.Combine(Repository.Root(), "src", "Host", "Web", "wwwroot");
        foreach (var file in Directory.EnumerateFiles(root, "*", SearchOption.AllDirectories))
        {
            var text = (await File.ReadAllTextAsync(file, Cancellation)).Replace("http://www.w3.org/2000/svg", "", StringComparison.Ordinal).Replace("http://0.0.0.0:5080", "", StringComparison.Ordinal);
            Assert.False(text.Contains("http://", StringComparison.Ordinal) || text.Contains("https://", StringComparison.Ordinal), file);
        }
    }

    private static async Task<string> StoreRunAsync(SoakStore store)
    {
        var recorder = await store.BeginRunAsync(new RunStart { Bench = "attic", Unit = "resistor 300 ohm", Bank = "60 W", Mains = "120 V 60 Hz", PlannedHours = 1 }, Cancellation);
        for (var second = 0; second < 200; second++)
        {
            if (second is >= 100 and < 130)
            {
                recorder.AppendMissed(second, "no-answer", "silence");
            }
            else
            {
                recorder.Append(new LineReading(second, 0.3));
            }
        }

        await recorder.EndAsync(new RunEnd(Verdict.Failed, ["For this test."]), Cancellation);
        return recorder.Run;
    }

    private static async Task<string?> TypeAsync(QuietPage page, string path)
    {
        using var answer = await page.Client.GetAsync(new Uri(path, UriKind.Relative), Cancellation);
        Assert.Equal(HttpStatusCode.OK, answer.StatusCode);
        return answer.Content.Headers.ContentType?.MediaType;
    }

    private static Task<JsonElement> GetAsync(QuietPage page, string path) => page.Client.GetFromJsonAsync<JsonElement>(new Uri(path, UriKind.Relative), Cancellation);

    private static HashSet<string> Names(JsonElement element) => [.. element.EnumerateObject().Select(property => property.Name)];
}
