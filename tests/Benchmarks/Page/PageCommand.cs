using System.Diagnostics;
using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web;
using Lampwarden.Host.Web.Access;
using Lampwarden.Host.Web.Live;
using Microsoft.Extensions.Logging.Abstractions;

namespace Lampwarden.Benchmarks.Page;

/// <summary>
/// What the page costs: first paint of a 72-hour run, each zoom, memory over an hour at 50 readings a second, and the host with
/// 40 benches at 10 readings a second. Figures of docs/page.md.
/// </summary>
internal static class PageCommand
{
    public static async Task<int> RunAsync(string[] args)
    {
        var what = args.FirstOrDefault() ?? "all";
        await using var chromium = await Chromium.StartAsync();
        if (chromium is null)
        {
            Console.Error.WriteLine("No Chromium is installed (Debian: apt-get install chromium).");
            return 3;
        }

        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{Environment.ProcessorCount} cores, load {LoadAverage()} before."));
        if (what is "all" or "look-back")
        {
            await LookBackAsync(chromium);
        }

        if (what is "all" or "memory")
        {
            await MemoryAsync(chromium);
        }

        if (what is "all" or "forty")
        {
            await FortyBenches.RunAsync(chromium);
        }

        return 0;
    }

    private static async Task LookBackAsync(Chromium chromium)
    {
        var folder = Directory.CreateTempSubdirectory("lampwarden-page-");
        using (var store = SoakStore.Open(folder.FullName, TimeProvider.System))
        {
            var run = await StoreThreeDaysAsync(store);
            var plan = Plan("attic");
            await using var board = new LiveBoard([plan], double.PositiveInfinity);
            await using var page = await ServeAsync(board, store);
            var paints = new List<double>();
            for (var pass = 0; pass < 5; pass++)
            {
                await chromium.GoAsync(new Uri($"{page.Url}/?{pass}#/run/{run}"));
                paints.Add((await chromium.AskAsync(Drawn(0))).GetProperty("at").GetDouble());
            }

            Print("72 h at 10 readings/s, from the address to the drawn trace, ms", paints);
            var (fine, first) = (new List<double>(), new List<double>());
            for (var zoom = 0; zoom < 18; zoom++)
            {
                var before = (await chromium.AskAsync("performance.now()")).GetDouble();
                await chromium.AskAsync("document.querySelector('.plot').dispatchEvent(new KeyboardEvent('keydown', { key: '+', bubbles: true })), 0");
                var drawn = await chromium.AskAsync(Drawn(before));
                first.Add(drawn.GetProperty("first").GetDouble() - before);
                fine.Add(drawn.GetProperty("at").GetDouble() - before);
            }

            Console.WriteLine("Zoomed to: " + (await chromium.AskAsync("document.querySelector('.zoom-keys [role=status]').textContent")).GetString());
            Print("Each of 18 zooms from 72 h to 1 s, until something is drawn, ms", first);
            Print("Each of 18 zooms from 72 h to 1 s, until drawn as fine as the screen, ms", fine);
        }

        folder.Delete(recursive: true);
    }

    // The page leaves a mark at each drawing; waits for the first that is as fine as the screen shows, and for its frame.
    private static string Drawn(double after) => string.Create(CultureInfo.InvariantCulture, $$"""
        new Promise((resolve, reject) => {
          let first = null;
          setTimeout(() => reject(new Error("nothing fine was drawn within ten seconds")), 10000);
          const look = () => {
            const mark = performance.getEntriesByName("trace-drawn").at(-1);
            if (mark && mark.startTime > {{after}}) {
              first ??= performance.now();
              if (mark.detail.fine) {
                resolve({ first, at: performance.now() });
                return;
              }
            }
            requestAnimationFrame(look);
          };
          look();
        })
        """);

    private static async Task MemoryAsync(Chromium chromium)
    {
        const int Beats = 7200, ReadingsPerBeat = 25;
        var folder = Directory.CreateTempSubdirectory("lampwarden-page-");
        using (var store = SoakStore.Open(folder.FullName, TimeProvider.System))
        {
            var plan = Plan("attic");
            await using var board = new LiveBoard([plan], double.PositiveInfinity);
            await using var page = await ServeAsync(board, store);
            board.Hear(new RunBegan("attic", "20260402-001", plan, DateTimeOffset.UnixEpoch));
            await chromium.GoAsync(new Uri(page.Url + "/?memory#/bench/attic"));
            await chromium.AskAsync("new Promise((resolve) => { const look = () => document.querySelector('.hero-time dd')?.textContent ? resolve(0) : setTimeout(look, 50); look(); })");
            Console.WriteLine("One hour at 50 readings/s, as fast as the page takes it (readings told, MB of script heap in use, nodes):");
            for (var beat = 0; beat <= Beats; beat++)
            {
                for (var reading = 0; reading < ReadingsPerBeat; reading++)
                {
                    var seconds = ((beat * ReadingsPerBeat) + reading) / 50.0;
                    board.Hear(new Observed("attic", new Observation(seconds, 0.3 + (0.002 * Math.Sin(seconds))), WatchPhase.Watching, () => $"All is well at {seconds:F1} s."));
                }

                board.Collect();
                if (beat % 20 == 0)
                {
                    // The page has to have drawn this before the next come.
                    await chromium.AskAsync("new Promise(requestAnimationFrame)");
                }

                if (beat % (Beats / 6) == 0)
                {
                    await Task.Delay(1000);
                    var shown = (await chromium.AskAsync("document.querySelector('.hero-time dd')?.textContent")).GetString();
                    var heap = await chromium.HeapBytesAsync();
                    var nodes = (await chromium.AskAsync("document.querySelectorAll('*').length")).GetInt32();
                    Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  {beat * ReadingsPerBeat,7}  {heap / 1e6,6:F2} MB  {nodes} nodes  (shown: {shown})"));
                }
            }
        }

        folder.Delete(recursive: true);
    }

    internal static BenchPlan Plan(string name, string port = "1", double readingsPerSecond = 10) => BenchPlan.From(
        new BenchOptions
        {
            Name = name,
            Mains = "120 V 60 Hz",
            Bank = "60 W 120 V || 25 W 120 V",
            Unit = "resistor 300 ohm",
            Meters = [new MeterOptions { Name = "line", ReadingsPerSecond = readingsPerSecond, WindowSeconds = 0.1, Transport = new TransportOptions { Kind = "tcp", Host = "127.0.0.1", Port = port } }],
        },
        LampInventory.Empty);

    private static Task<PageServer> ServeAsync(LiveBoard board, SoakStore store) => PageServer.StartAsync(
        PageAddress.Of(new WebOptions { Address = "http://127.0.0.1:0" }, "benchmark"), LampInventory.Empty, new PageParts(board, [], store, NullLoggerFactory.Instance));

    private static async Task<string> StoreThreeDaysAsync(SoakStore store)
    {
        const int Count = 72 * 3600 * 10;
        var watch = Stopwatch.StartNew();
        var recorder = await store.BeginRunAsync(new RunStart { Bench = "attic", Unit = "resistor 300 ohm", Bank = "60 W", Mains = "120 V 60 Hz", PlannedHours = 72 });
        var random = new Random(7);
        for (var index = 0; index < Count; index++)
        {
            var seconds = index / 10.0;
            while (!recorder.Append(new LineReading(seconds, Math.Round(0.31 + (0.006 * Math.Sin(seconds / 4000)) + (0.0006 * random.NextDouble()), 4), 4)))
            {
                await recorder.FlushAsync();
            }

            if (index % 20_000 == 0)
            {
                await recorder.FlushAsync();
            }
        }

        await recorder.EndAsync(new RunEnd(Verdict.Passed, ["It kept to its band."]));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{Count} readings stored in {watch.Elapsed.TotalSeconds:F1} s."));
        return recorder.Run;
    }

    private static void Print(string what, List<double> values) => Console.WriteLine(string.Create(
        CultureInfo.InvariantCulture, $"{what}: median {values.Order().ElementAt(values.Count / 2):F0}, worst {values.Max():F0}"));

    internal static string LoadAverage() => File.Exists("/proc/loadavg") ? File.ReadAllText("/proc/loadavg").Split(' ')[0] : "unknown";
}
