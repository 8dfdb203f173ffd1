using System.Diagnostics;
using System.Globalization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Benchmarks.Recording;

/// <summary>
/// <c>store</c>: the packed store against a plain table of one row a reading, in one run: bytes a reading, append rate,
/// window query with the file out of the system's cache. Judge the ratios; the absolute figures are this machine's.
/// </summary>
internal static class StoreCommand
{
    private const int Buckets = 2000;
    private const int PerCommit = 4_000;
    private const int Repeats = 15;

    public static async Task<int> RunAsync()
    {
        Console.WriteLine("A settled 12-hour run at 10/s (432,000 readings, six digits, milliseconds), bytes a reading once closed:");
        foreach (var (noise, jitter) in new[] { (5.0, 0.5), (20, 1.5), (100, 1.5), (100, 4), (400, 8), (800, 8) })
        {
            var (packed, _) = await MeasureAsync(12, 10, noise, jitter, plain: false);
            Console.WriteLine(Text($"  noise {noise,4:0} counts, jitter {jitter,3:0.0} ms: {packed.BytesPerReading:0.00}"));
        }

        Console.WriteLine("A 72-hour run at 10/s (2,592,000 readings), noise 20 counts, jitter 1.5 ms:");
        var (ours, table) = await MeasureAsync(72, 10, 20, 1.5, plain: true);
        Row("bytes a reading", ours.BytesPerReading, table!.BytesPerReading);
        Row("appended a second", ours.AppendPerSecond, table.AppendPerSecond);
        foreach (var window in ours.WindowMs.Keys)
        {
            Row($"2,000 buckets, {window}, ms", ours.WindowMs[window], table.WindowMs[window]);
        }

        return 0;
    }

    private sealed record Measured(double BytesPerReading, double AppendPerSecond, Dictionary<string, double> WindowMs);

    private static async Task<(Measured Packed, Measured? Plain)> MeasureAsync(double hours, double perSecond, double noise, double jitter, bool plain)
    {
        var folder = Directory.CreateTempSubdirectory("lampwarden-store-").FullName;
        var readings = SoakSeries.Settled(hours, perSecond, noise, jitter).ToArray();
        var windows = Windows(hours);
        try
        {
            var packed = await PackedAsync(folder, readings, windows);
            return (packed, plain ? Plain(Path.Combine(folder, "plain.db"), readings, windows) : null);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private static Dictionary<string, (double From, double To)> Windows(double hours) => new()
    {
        ["the whole run"] = (0, hours * 3600),
        ["half of it"] = (hours * 900, hours * 2700),
        ["six hours"] = (36_000, 57_600),
        ["five hours"] = (36_000, 54_000),
        ["ten minutes"] = (40_000, 40_600),
    };

    private static async Task<Measured> PackedAsync(string folder, LineReading[] readings, Dictionary<string, (double From, double To)> windows)
    {
        string id;
        double seconds;
        using (var store = SoakStore.Open(folder, TimeProvider.System))
        {
            var run = await store.BeginRunAsync(new RunStart { Bench = "b", Unit = "u", Bank = "k", Mains = "m" });
            id = run.Run;
            var watch = Stopwatch.StartNew();
            foreach (var some in readings.Chunk(PerCommit))
            {
                foreach (ref readonly var reading in some.AsSpan())
                {
                    run.Append(reading);
                }

                await run.FlushAsync();
            }

            await run.EndAsync(new RunEnd(Verdict.Passed, []));
            seconds = watch.Elapsed.TotalSeconds;
        }

        var path = Path.Combine(folder, SoakStore.FileName);
        using var review = SoakStore.Open(folder, TimeProvider.System, StoreMode.Review);
        // The code, not the file, is warm: the service that answers these has been running for hours.
        foreach (var window in Enumerable.Repeat(windows.Values, 5).SelectMany(all => all))
        {
            review.Window(id, window.From, window.To, Buckets);
        }

        return new Measured((double)new FileInfo(path).Length / readings.Length, readings.Length / seconds, Time(path, windows, window => review.Window(id, window.From, window.To, Buckets)));
    }

    private static Measured Plain(string path, LineReading[] readings, Dictionary<string, (double From, double To)> windows)
    {
        var watch = Stopwatch.StartNew();
        using (var table = new PlainTable(path))
        {
            table.Append(readings, PerCommit);
        }

        var seconds = watch.Elapsed.TotalSeconds;
        return new Measured((double)new FileInfo(path).Length / readings.Length, readings.Length / seconds, Time(path, windows, window =>
        {
            using var table = new PlainTable(path);
            table.Window(window.From, window.To, Buckets);
        }));
    }

    private static Dictionary<string, double> Time(string path, Dictionary<string, (double From, double To)> windows, Action<(double From, double To)> ask) =>
        windows.ToDictionary(window => window.Key, window => Enumerable.Range(0, Repeats).Select(_ =>
        {
            ColdFile.Forget(path);
            var watch = Stopwatch.StartNew();
            ask(window.Value);
            return watch.Elapsed.TotalMilliseconds;
        }).Order().ElementAt(Repeats / 2));

    private static void Row(string what, double ours, double table) =>
        Console.WriteLine(Text($"  {what,-40} packed {ours,12:#,0.00}   plain {table,12:#,0.00}   ratio {ours / table:0.000}"));

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
