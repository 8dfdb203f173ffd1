using System.Diagnostics;
using System.Globalization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Benchmarks.Recording;

/// <summary>
/// <c>kill-store [--times 200]</c>: kills a recording process at random instants, over and over on one store, and checks
/// after each kill that the store opens, that at most the last second of readings is missing, and that no alert change
/// that had been told is. Exits with 1 at the first thing that is not so. Needs the test project CrashChild to be built.
/// </summary>
internal static class KillStoreCommand
{
    private const int SecondMs = 1000;

    public static async Task<int> RunAsync(string[] args)
    {
        var times = args is ["--times", var text] ? int.Parse(text, CultureInfo.InvariantCulture) : 200;
        var folder = Directory.CreateTempSubdirectory("lampwarden-kill-").FullName;
        var random = new Random(200);
        var (longestMs, alerts, readings) = (0L, 0, 0L);
        for (var round = 1; round <= times; round++)
        {
            var life = await LiveAndDieAsync(folder, TimeSpan.FromMilliseconds(random.Next(0, 5000)));
            using var store = SoakStore.Open(folder, TimeProvider.System, StoreMode.Review);
            var stored = life.Run.Length == 0 ? 0 : store.Readings(life.Run).Count();
            var lostMs = stored < life.ReadAtMs.Count ? life.ReadAtMs[^1] - life.ReadAtMs[stored] : 0;
            var kept = life.Run.Length == 0 ? [] : store.Run(life.Run).AlertChanges.Select(change => change.Alert).ToHashSet();
            if (lostMs > SecondMs || !kept.IsSupersetOf(life.Told) || life.Interrupted > 1)
            {
                Console.Error.WriteLine($"Round {round}: {lostMs} ms of readings lost, {life.Told.Count(alert => !kept.Contains(alert))} told alerts lost, {life.Interrupted} runs closed. Store in {folder}.");
                return 1;
            }

            (longestMs, alerts, readings) = (Math.Max(longestMs, lostMs), alerts + life.Told.Count, readings + stored);
            if (round % 20 == 0)
            {
                Console.Error.WriteLine($"{round} kills, {readings} readings and {alerts} told alerts there, at most {longestMs} ms lost");
            }
        }

        using var last = SoakStore.Open(folder, TimeProvider.System);
        var runs = last.Runs();
        var whole = runs.All(run => run.Verdict == Verdict.Incomplete && last.Readings(run.Run).Count() == run.Readings);
        Console.WriteLine($"{times} kills over one store: {runs.Count} runs all readable and closed: {whole}; {readings} readings kept, at most {longestMs} ms lost at a kill; {alerts} told alert changes, none lost.");
        Directory.Delete(folder, recursive: true);
        return whole ? 0 : 1;
    }

    private sealed record Life(string Run, int Interrupted, List<long> ReadAtMs, HashSet<string> Told);

    private static async Task<Life> LiveAndDieAsync(string folder, TimeSpan after)
    {
        var start = new ProcessStartInfo("dotnet") { RedirectStandardOutput = true };
        start.ArgumentList.Add(Path.Combine(AppContext.BaseDirectory, "Lampwarden.CrashChild.dll"));
        start.ArgumentList.Add(folder);
        using var child = Process.Start(start)!;
        // From the very start, so that some die while they open, migrate or close the run before.
        var killing = Task.Delay(after).ContinueWith(_ => child.Kill(), TaskScheduler.Default);
        var (run, interrupted, reads, told) = ("", 0, new List<long>(), new HashSet<string>());
        while (await child.StandardOutput.ReadLineAsync() is { } line)
        {
            var words = line.Split(' ');
            switch (words[0])
            {
                case "interrupted": interrupted = int.Parse(words[1], CultureInfo.InvariantCulture); break;
                case "run": run = words[1]; break;
                case "read" when words.Length == 3: reads.Add(long.Parse(words[2], CultureInfo.InvariantCulture)); break;
                case "told" when words.Length == 2: told.Add($"alert-{words[1]}"); break;
            }
        }

        await killing;
        return new Life(run, interrupted, reads, told);
    }
}
