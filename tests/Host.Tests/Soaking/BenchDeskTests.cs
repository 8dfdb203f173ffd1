using System.Net;
using System.Text.Json;
using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>The whole service with its page over a simulated meter: a soak started, told of, ended, and the next one started.</summary>
public sealed class BenchDeskTests
{
    [Fact]
    public async Task Soak_FromThePage_StartsEndsAndStartsAgain()
    {
        await using var live = await LivePage.OpenAsync(speed: 20);
        await live.UntilAsync(bench => bench.GetProperty("phase").GetString() == "idle" && bench.GetProperty("canStart").GetBoolean());
        await live.UntilAsync(bench => bench.GetProperty("now").GetProperty("lineAmps").ValueKind == JsonValueKind.Number);

        Assert.Equal(HttpStatusCode.BadRequest, await live.PostAsync("soak", new { unit = "resistor of gold", bank = "60 W", plannedHours = 1 }));
        Assert.Equal(HttpStatusCode.BadRequest, await live.PostAsync("soak", new { unit = "resistor 300 ohm", bank = "60 W", plannedHours = 0 }));
        Assert.Equal(HttpStatusCode.Accepted, await live.PostAsync("soak", new { unit = "resistor 250 ohm", bank = "100 W 120 V", plannedHours = 1, unitLabel = "job 118" }));
        Assert.Equal(HttpStatusCode.Conflict, await live.PostAsync("soak", new { unit = "resistor 250 ohm", bank = "100 W 120 V", plannedHours = 1 }));
        await live.UntilAsync(bench => bench.GetProperty("phase").GetString() == "waiting");

        live.Bench.Amps = 0.4;
        var soaking = await live.UntilAsync(bench => bench.GetProperty("run").ValueKind == JsonValueKind.String && bench.GetProperty("seconds").GetDouble() > 5);
        Assert.Equal(("resistor 250 ohm", "100 W 120 V", "job 118"), (Text(soaking, "unit"), Text(soaking, "bank"), Text(soaking, "unitLabel")));
        Assert.Equal(HttpStatusCode.NoContent, await live.PostAsync("announcements", new { kind = "load-changed" }));
        Assert.Equal(HttpStatusCode.NoContent, await live.PostAsync("notes", new { text = "C3 feels warm" }));
        Assert.Equal(HttpStatusCode.Conflict, await live.PostAsync("alerts/7/acknowledge", new { }));

        Assert.Equal(HttpStatusCode.Accepted, await live.PostAsync("soak/end", new { }));
        var ended = await live.UntilAsync(bench => bench.GetProperty("phase").GetString() == "ended" && bench.GetProperty("canStart").GetBoolean());
        var record = await live.RunAsync(Text(ended, "run"));
        Assert.Equal("incomplete", Text(record, "verdict"));
        Assert.Equal(["Told the watch: the load was changed.", "C3 feels warm"], record.GetProperty("notes").EnumerateArray().Select(note => Text(note, "text")));

        Assert.Equal(HttpStatusCode.Accepted, await live.PostAsync("soak", new { unit = "resistor 300 ohm", bank = "60 W 120 V", plannedHours = 1 }));
        var again = await live.UntilAsync(bench => bench.GetProperty("run").ValueKind == JsonValueKind.String && Text(bench, "run") != Text(ended, "run"));
        Assert.Equal("resistor 300 ohm", Text(again, "unit"));
    }

    [Fact]
    public async Task Soak_EndedWithAnAlertNobodySaw_TellsItAgainUntilSomebodyDoes()
    {
        await using var live = await LivePage.OpenAsync(speed: 60);
        await live.UntilAsync(bench => bench.GetProperty("canStart").GetBoolean());
        await live.PostAsync("soak", new { unit = "resistor 250 ohm", bank = "100 W 120 V", plannedHours = 1 });
        live.Bench.Amps = 0.4;
        await live.UntilAsync(bench => bench.GetProperty("run").ValueKind == JsonValueKind.String && bench.GetProperty("seconds").GetDouble() > 60);
        live.Bench.Amps = 0.82;
        await live.UntilAsync(bench => bench.GetProperty("alerts").EnumerateArray().Any(alert => Text(alert, "severity") == "critical"));

        await live.PostAsync("soak/end", new { });
        var told = await live.UntilAsync(bench => Text(bench, "phase") == "ended"
            && bench.GetProperty("alerts").EnumerateArray().Any(alert => alert.GetProperty("repeats").GetInt32() > 0));
        var number = told.GetProperty("alerts").EnumerateArray().First(alert => alert.GetProperty("repeats").GetInt32() > 0).GetProperty("number").GetInt32();
        Assert.Equal(HttpStatusCode.OK, await live.PostAsync($"alerts/{number}/acknowledge", new { by = "Kim" }));
        Assert.Equal(HttpStatusCode.Conflict, await live.PostAsync($"alerts/{number}/acknowledge", new { by = "Kim" }));

        // What the next soak finds open is closed: the bench's retained state must not show the last unit's short.
        await live.PostAsync("soak", new { unit = "resistor 300 ohm", bank = "60 W 120 V", plannedHours = 1 });
        await live.UntilAsync(bench => Text(bench, "phase") != "ended");
        var steps = (await live.RunAsync(Text(told, "run"))).GetProperty("alerts").EnumerateArray()
            .Where(step => Text(step, "alert") == number.ToString(System.Globalization.CultureInfo.InvariantCulture)).Select(step => Text(step, "transition")).ToList();
        Assert.Equal("raised", steps[0]);
        Assert.Equal(["repeated", "acknowledged", "closed"], steps[^3..]);
    }

    private static string? Text(JsonElement element, string name) => element.GetProperty(name).GetString();
}
