using System.Diagnostics;
using System.Globalization;
using System.Text;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Forwarding;

namespace Lampwarden.Benchmarks.Recording;

/// <summary>
/// <c>forward --url http://127.0.0.1:8428 [--api v1|v2] [--bucket soaks] [--hours 1] [--rate 100]</c>: a backlog from the store to a running server, against a bare
/// HttpClient that posts the same points as ready-made lines. Judge the ratio and whether the backlog catches up at 20,000 points a second.
/// </summary>
internal static class ForwardCommand
{
    private const int BareBatch = 5_000;

    public static async Task<int> RunAsync(string[] args)
    {
        var options = args.Chunk(2).ToDictionary(pair => pair[0], pair => pair[1]);
        var influx = new InfluxOptions
        {
            Url = options["--url"], Org = "shop", Bucket = options.GetValueOrDefault("--bucket", "soaks"), Api = options.GetValueOrDefault("--api", "v2"),
        };
        var hours = double.Parse(options.GetValueOrDefault("--hours", "1"), CultureInfo.InvariantCulture);
        var rate = double.Parse(options.GetValueOrDefault("--rate", "100"), CultureInfo.InvariantCulture);
        var readings = SoakSeries.Settled(hours, rate, 20, 1.5).ToArray();
        var folder = Directory.CreateTempSubdirectory("lampwarden-forward-").FullName;
        using var store = SoakStore.Open(folder, TimeProvider.System);
        var run = await store.BeginRunAsync(new RunStart { Bench = "forward", Unit = "u", Bank = "k", Mains = "m" });
        foreach (var some in readings.Chunk(10_000))
        {
            Array.ForEach(some, reading => run.Append(reading));
            await run.FlushAsync();
        }

        await run.EndAsync(new RunEnd(Verdict.Passed, []));
        var bare = await BareAsync(influx, readings);
        using var forwarder = new InfluxForwarder(store, influx, TimeProvider.System);
        var watch = Stopwatch.StartNew();
        while (await forwarder.RoundAsync(CancellationToken.None) is { More: true } or { Outcome.Result: not SendResult.Sent })
        {
            if (forwarder.Health.Trouble is { } trouble)
            {
                Console.Error.WriteLine(trouble);
                return 3;
            }
        }

        var ours = forwarder.Health.Sent / watch.Elapsed.TotalSeconds;
        Console.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"{readings.Length:#,0} points: forwarded from the store at {ours:#,0} a second, by a bare client at {bare:#,0} a second, ratio {ours / bare:0.00}"));
        return 0;
    }

    private static async Task<double> BareAsync(InfluxOptions influx, LineReading[] readings)
    {
        var bodies = readings.Chunk(BareBatch).Select(some => some.Aggregate(new StringBuilder(), (text, reading) => text.Append(
            CultureInfo.InvariantCulture, $"bare_reading,bench=forward,run=bare amps={reading.Amps} {1_700_000_000_000 + reading.Milliseconds}\n")).ToString()).ToList();
        using var http = new HttpClient();
        var address = new Uri(influx.Api == "v1" ? $"{influx.Url}/write?db={influx.Bucket}&precision=ms" : $"{influx.Url}/api/v2/write?bucket={influx.Bucket}&org=shop&precision=ms");
        var watch = Stopwatch.StartNew();
        foreach (var body in bodies)
        {
            using var answer = await http.PostAsync(address, new StringContent(body));
            answer.EnsureSuccessStatusCode();
        }

        return readings.Length / watch.Elapsed.TotalSeconds;
    }
}
