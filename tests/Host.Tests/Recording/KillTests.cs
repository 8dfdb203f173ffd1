using System.Diagnostics;
using System.Globalization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Tests.Recording;

/// <summary>A process is killed in mid-run. The long form (200 kills in a row over one store) is `kill-store` of the benchmarks.</summary>
public sealed class KillTests
{
    [Fact]
    public async Task Kill_InMidRun_LosesAtMostTheLastSecondAndNoAlertThatWasTold()
    {
        using var folder = new TempFolder();
        var random = new Random(2);
        for (var round = 0; round < 3; round++)
        {
            var (id, interrupted, reads, told) = await RecordAndKillAsync(folder.Path, TimeSpan.FromMilliseconds(random.Next(900, 2200)));
            Assert.Equal(round == 0 ? 0 : 1, interrupted);

            // Only looks: the next round's process is the one that must recognise and close the run.
            using var store = SoakStore.Open(folder.Path, TimeProvider.System, StoreMode.Review);
            var stored = store.Readings(id).Count();
            var killedAt = reads[^1];
            var mustBeThere = reads.FindLastIndex(at => at <= killedAt - 1000) + 1;
            Assert.InRange(stored, Math.Max(1, mustBeThere), int.MaxValue);
            Assert.Equal(told, store.Run(id).AlertChanges.Select(change => change.Alert).Intersect(told));
        }

        using var after = SoakStore.Open(folder.Path, TimeProvider.System);
        Assert.All(after.Runs(), run => Assert.Equal(Verdict.Incomplete, run.Verdict));
    }

    private static async Task<(string Run, int Interrupted, List<long> Reads, List<string> Told)> RecordAndKillAsync(string folder, TimeSpan after)
    {
        var start = new ProcessStartInfo("dotnet") { RedirectStandardOutput = true };
        start.ArgumentList.Add(Path.Combine(AppContext.BaseDirectory, "Lampwarden.CrashChild.dll"));
        start.ArgumentList.Add(folder);
        using var child = Process.Start(start)!;
        var (run, interrupted, reads, told) = ("", 0, new List<long>(), new List<string>());
        var watch = new Stopwatch();
        while (await child.StandardOutput.ReadLineAsync() is { } line)
        {
            var words = line.Split(' ');
            switch (words[0])
            {
                case "interrupted": interrupted = int.Parse(words[1], CultureInfo.InvariantCulture); break;
                case "run": run = words[1]; watch.Start(); break;
                case "read" when words.Length == 3: reads.Add(long.Parse(words[2], CultureInfo.InvariantCulture)); break;
                case "told": told.Add($"alert-{words[1]}"); break;
            }

            if (watch.Elapsed > after && !child.HasExited)
            {
                child.Kill();
            }
        }

        return (run, interrupted, reads, told);
    }
}
