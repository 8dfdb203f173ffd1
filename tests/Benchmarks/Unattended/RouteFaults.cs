using System.Net;
using System.Net.Sockets;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>Faults of the ways in which people are told. Each shift shorts its unit after six seconds: somebody must hear of it.</summary>
internal static class RouteFaults
{
    public static IEnumerable<Fault> All =>
    [
        Broken("answers 500 for a while", inbox => inbox.Status = 500, mends: true),
        Broken("takes the connection and never answers", inbox => inbox.Status = 0, mends: false),
        Broken("answers 401: the secret is wrong", inbox => inbox.Status = 401, mends: false),
        new("route", "the mail server is not there", "the other route is told of the short at once, and that mail is down", () => OtherAsync($$"""
            { "kind": "mail", "name": "broken", "attemptSeconds": 2, "downAfterSeconds": 3, "mail": { "host": "127.0.0.1", "port": {{FreePort()}}, "tls": "none", "from": "bench@shop.example", "to": [ "night@shop.example" ] } }
            """)),
        new("route", "the mail server says nothing at all", "the other route is told of the short at once, and that mail is down", SilentMailAsync),
        new("route", "the MQTT broker is not there", "the other route is told of the short at once, and that the broker is down", () => OtherAsync($$"""
            { "kind": "mqtt", "name": "broken", "attemptSeconds": 2, "downAfterSeconds": 3, "mqtt": { "host": "127.0.0.1", "port": {{FreePort()}} } }
            """)),
        new("route", "the program to run hangs and ignores SIGTERM", "it is killed at its deadline; the other route is told of the short at once, and that it is down", () => OtherAsync("""
            { "kind": "command", "name": "broken", "attemptSeconds": 1, "downAfterSeconds": 3, "command": { "program": "/bin/sh", "arguments": [ "-c", "trap '' TERM; while :; do sleep 1; done" ] } }
            """)),
        new("route", "the only route that tells at once is dead, the other waits for repeats", "the other steps in without waiting", StepInAsync),
    ];

    private static Fault Broken(string how, Action<Inbox> breakIt, bool mends) => new(
        "route",
        $"the webhook {how}",
        mends ? "tried again until it is taken, once the far end works" : "the other route is told of the short at once, and that this one is down",
        async () =>
        {
            using var broken = new Inbox();
            using var other = new Inbox();
            breakIt(broken);
            await using var shift = Shift.Prepare(Shift.Short(6));
            await shift.StartAsync($$"""{ "routes": [ {{broken.Route("broken", """ "attemptSeconds": 2, "downAfterSeconds": 4, """)}}, {{other.Route("other")}} ] }""");
            var told = await other.UntilAsync(letter => letter.Cause == "hard-short", "hard-short by the other route");
            if (mends)
            {
                await Wait.UntilAsync(() => broken.Requests >= 2, "a second try");
                broken.Status = 204;
                await broken.UntilAsync(letter => letter.Cause == "hard-short", "hard-short by the mended route");
                await shift.StopAsync();
                return $"other route told; this one took it at try {broken.Requests}";
            }

            var down = await other.UntilAsync(letter => letter.Cause == "route-down", "route-down by the other route");
            await shift.StopAsync();
            return $"other told {told.Cause}, and: {down.Text.Split(". ")[0]}";
        });

    private static async Task<string> OtherAsync(string brokenRoute)
    {
        using var other = new Inbox();
        await using var shift = Shift.Prepare(Shift.Short(6));
        await shift.StartAsync($$"""{ "routes": [ {{brokenRoute}}, {{other.Route("other")}} ] }""");
        var told = await other.UntilAsync(letter => letter.Cause == "hard-short", "hard-short by the other route");
        var down = await other.UntilAsync(letter => letter.Cause == "route-down", "route-down by the other route", 60);
        await shift.StopAsync();
        return $"other told {told.Cause}, and: {System.Text.RegularExpressions.Regex.Replace(down.Text.Split(". ")[0], ":[0-9]{4,5}", ":PORT")}";
    }

    private static async Task<string> SilentMailAsync()
    {
        using var mute = new TcpListener(IPAddress.Loopback, 0);
        mute.Start();
        return await OtherAsync($$"""
            { "kind": "mail", "name": "broken", "attemptSeconds": 2, "downAfterSeconds": 3, "mail": { "host": "127.0.0.1", "port": {{((IPEndPoint)mute.LocalEndpoint).Port}}, "tls": "none", "from": "bench@shop.example", "to": [ "night@shop.example" ] } }
            """);
    }

    private static async Task<string> StepInAsync()
    {
        using var broken = new Inbox { Status = 500 };
        using var later = new Inbox();
        await using var shift = Shift.Prepare(Shift.Short(6));
        await shift.StartAsync($$"""
            { "repeatMinutes": 60, "routes": [ {{broken.Route("broken", """ "attemptSeconds": 2, "downAfterSeconds": 3, """)}}, {{later.Route("later", """ "afterRepeats": 2, """)}} ] }
            """);
        var told = await later.UntilAsync(letter => letter.Cause == "hard-short", "hard-short by the route that waits for repeats");
        await shift.StopAsync();
        return $"{told.Cause} told by the route that would have waited two hours";
    }

    private static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }
}
