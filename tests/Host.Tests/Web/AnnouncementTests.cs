using System.Net;
using System.Net.Http.Json;
using System.Text.Json;
using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Host.Tests.Web;

/// <summary>What a person tells the watch over HTTP.</summary>
public sealed class AnnouncementTests
{
    private static CancellationToken Cancellation => TestContext.Current.CancellationToken;

    [Fact]
    public async Task Announce_DuringARun_IsKeptAsANoteAtItsTime()
    {
        await using var live = await LivePage.OpenAsync(speed: 20);
        await live.UntilAsync(bench => bench.GetProperty("canStart").GetBoolean());
        Assert.Equal(HttpStatusCode.Accepted, await live.PostAsync("soak", new { unit = "resistor 300 ohm", bank = "60 W 120 V", plannedHours = 1 }));
        await live.UntilAsync(bench => bench.GetProperty("phase").GetString() == "waiting");
        Assert.Equal((HttpStatusCode.Conflict, "No run"), await RefusedAsync(live.Client, "attic", new { kind = "load-changed" }));

        live.Bench.Amps = 0.3;
        var soaking = await live.UntilAsync(bench => bench.GetProperty("run").ValueKind == JsonValueKind.String && bench.GetProperty("seconds").GetDouble() > 5);
        foreach (var body in new object[] { new { kind = "load-changed", detail = "  Volume to half " }, new { kind = "cycles-by-itself" }, new { kind = "meter-changed", detail = "" } })
        {
            Assert.Equal(HttpStatusCode.NoContent, await live.PostAsync("announcements", body));
        }

        var record = await live.RunAsync(soaking.GetProperty("run").GetString());
        var notes = record.GetProperty("notes").EnumerateArray().ToList();
        Assert.Equal(
            ["Told the watch: the load was changed. Volume to half", "Told the watch: the unit switches by itself.", "Told the watch: the meter's range was changed."],
            notes.Select(note => note.GetProperty("text").GetString()));
        Assert.All(notes, note => Assert.True(note.GetProperty("atSeconds").GetDouble() >= soaking.GetProperty("seconds").GetDouble()));
    }

    [Theory]
    [InlineData("""{"kind":"moon-rose"}""", "moon-rose")]
    [InlineData("""{"detail":"Volume to half"}""", "kind is ''")]
    [InlineData("""{"kind":"LoadChanged"}""", "kind is 'LoadChanged'")]
    public async Task Announce_UnknownKind_IsAProblem(string body, string said)
    {
        await using var page = await QuietPage.OpenAsync();

        using var content = new StringContent(body, System.Text.Encoding.UTF8, "application/json");
        using var answer = await page.Client.PostAsync(new Uri("/api/benches/attic/announcements", UriKind.Relative), content, Cancellation);

        Assert.Equal(HttpStatusCode.BadRequest, answer.StatusCode);
        Assert.Equal("application/problem+json", answer.Content.Headers.ContentType?.MediaType);
        var detail = (await answer.Content.ReadFromJsonAsync<JsonElement>(Cancellation)).GetProperty("detail").GetString();
        Assert.Contains(said, detail, StringComparison.Ordinal);
        Assert.Contains("load-changed, lamp-switched, cycles-by-itself, meter-changed", detail, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Announce_WordsTooLong_IsAProblem()
    {
        await using var page = await QuietPage.OpenAsync();

        Assert.Equal((HttpStatusCode.BadRequest, "That cannot be"), await RefusedAsync(page.Client, "attic", new { kind = "load-changed", detail = new string('x', 501) }));
    }

    [Theory]
    [InlineData("attic", HttpStatusCode.Conflict, "No run")]
    [InlineData("nowhere", HttpStatusCode.NotFound, "No such bench")]
    public async Task Announce_NothingToTell_IsAProblem(string bench, HttpStatusCode status, string title)
    {
        await using var page = await QuietPage.OpenAsync();

        Assert.Equal((status, title), await RefusedAsync(page.Client, bench, new { kind = "load-changed" }));
    }

    private static async Task<(HttpStatusCode Status, string? Title)> RefusedAsync(HttpClient client, string bench, object body)
    {
        using var answer = await client.PostAsJsonAsync(new Uri($"/api/benches/{bench}/announcements", UriKind.Relative), body, Cancellation);
        return (answer.StatusCode, (await answer.Content.ReadFromJsonAsync<JsonElement>(Cancellation)).GetProperty("title").GetString());
    }
}
