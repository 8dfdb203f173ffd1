using System.Net;
using System.Net.Http.Json;
using System.Text.Json;
using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>The whole service with its page over a simulated meter: a soak started, told of, ended, and the next one started.</summary>
public sealed class BenchDeskTests
{
    private static CancellationToken Cancellation => TestContext.Current.CancellationToken;

    [Fact]
    public async Task Soak_FromThePage_StartsEndsAndStartsAgain()
    {
        await using var live = await LivePage.OpenAsync(speed: 20);
        using var client = new HttpClient { BaseAddress = live.Url };
        await UntilAsync(client, bench => bench.GetProperty("phase").GetString() == "idle" && bench.GetProperty("canStart").GetBoolean());
        await UntilAsync(client, bench => bench.GetProperty("now").GetProperty("lineAmps").ValueKind == JsonValueKind.Number);

        Assert.Equal(HttpStatusCode.BadRequest, await PostAsync(client, "soak", new { unit = "resistor of gold", bank = "60 W", plannedHours = 1 }));
        Assert.Equal(HttpStatusCode.BadRequest, await PostAsync(client, "soak", new { unit = "resistor 300 ohm", bank = "60 W", plannedHours = 0 }));
        Assert.Equal(HttpStatusCode.Accepted, await PostAsync(client, "soak", new { unit = "resistor 250 ohm", bank = "100 W 120 V", plannedHours = 1, unitLabel = "job 118" }));
        Assert.Equal(HttpStatusCode.Conflict, await PostAsync(client, "soak", new { unit = "resistor 250 ohm", bank = "100 W 120 V", plannedHours = 1 }));
        await UntilAsync(client, bench => bench.GetProperty("phase").GetString() == "waiting");

        live.Bench.Amps = 0.4;
        var soaking = await UntilAsync(client, bench => bench.GetProperty("run").ValueKind == JsonValueKind.String && bench.GetProperty("seconds").GetDouble() > 5);
        Assert.Equal(("resistor 250 ohm", "100 W 120 V", "job 118"), (Text(soaking, "unit"), Text(soaking, "bank"), Text(soaking, "unitLabel")));
        Assert.Equal(HttpStatusCode.NoContent, await PostAsync(client, "announcements", new { kind = "load-changed" }));
        Assert.Equal(HttpStatusCode.NoContent, await PostAsync(client, "notes", new { text = "C3 feels warm" }));
        Assert.Equal(HttpStatusCode.Conflict, await PostAsync(client, "alerts/7/acknowledge", new { }));

        Assert.Equal(HttpStatusCode.Accepted, await PostAsync(client, "soak/end", new { }));
        var ended = await UntilAsync(client, bench => bench.GetProperty("phase").GetString() == "ended" && bench.GetProperty("canStart").GetBoolean());
        var record = await client.GetFromJsonAsync<JsonElement>(new Uri($"/api/runs/{Text(ended, "run")}", UriKind.Relative), Cancellation);
        Assert.Equal("incomplete", Text(record, "verdict"));
        Assert.Equal(["Told the watch: the load was changed.", "C3 feels warm"], record.GetProperty("notes").EnumerateArray().Select(note => Text(note, "text")));

        Assert.Equal(HttpStatusCode.Accepted, await PostAsync(client, "soak", new { unit = "resistor 300 ohm", bank = "60 W 120 V", plannedHours = 1 }));
        var again = await UntilAsync(client, bench => bench.GetProperty("run").ValueKind == JsonValueKind.String && Text(bench, "run") != Text(ended, "run"));
        Assert.Equal("resistor 300 ohm", Text(again, "unit"));

        async Task<HttpStatusCode> PostAsync(HttpClient to, string rest, object body)
        {
            using var answer = await to.PostAsJsonAsync(new Uri($"/api/benches/attic/{rest}", UriKind.Relative), body, Cancellation);
            return answer.StatusCode;
        }
    }

    private static string? Text(JsonElement element, string name) => element.GetProperty(name).GetString();

    private static async Task<JsonElement> UntilAsync(HttpClient client, Func<JsonElement, bool> good)
    {
        JsonElement bench = default;
        for (var attempt = 0; attempt < 600; attempt++)
        {
            bench = await client.GetFromJsonAsync<JsonElement>(new Uri("/api/benches/attic", UriKind.Relative), Cancellation);
            if (good(bench))
            {
                return bench;
            }

            await Task.Delay(50, Cancellation);
        }

        throw new TimeoutException($"The bench never came to it: {bench}");
    }
}
