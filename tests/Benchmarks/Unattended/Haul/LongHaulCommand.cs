using System.Diagnostics;
using System.Globalization;
using Lampwarden.Host.Recording;

namespace Lampwarden.Benchmarks.Unattended.Haul;

/// <summary>
/// <c>long-haul</c>: simulated shifts of twelve hours on four benches in one process, each bench with another fault of the
/// catalogue or none: is everything found, does anything cry wolf, does anything grow?
/// </summary>
internal static class LongHaulCommand
{
    /// <summary>Early and late in a shift, in polls, where the heap is looked at while all four benches run.</summary>
    private static readonly long[] Looks = [720, 8500];

    public static async Task<int> RunAsync(string[] args)
    {
        var shifts = args is ["--shifts", var count, ..] ? int.Parse(count, CultureInfo.InvariantCulture) : 60;
        var folder = Directory.CreateTempSubdirectory("lw-haul-");
        var results = new List<HaulResult>();
        var start = Stopwatch.GetTimestamp();
        Console.WriteLine("| shift | simulated days | heap MB after 1 h | after 11.8 h | between shifts | process MB | handles | threads |");
        Console.WriteLine("| --: | --: | --: | --: | --: | --: | --: | --: |");
        for (var shift = 0; shift < shifts; shift++)
        {
            var heaps = new List<double>();
            var ofShift = await HaulShift.RunAsync(shift, folder.FullName, round =>
            {
                if (Looks.Contains(round))
                {
                    heaps.Add(HeapMegabytes());
                }
            });
            results.AddRange(ofShift);
            foreach (var result in ofShift.Where(result => !result.IsFound || result.Cries.Count > 0))
            {
                Console.Error.WriteLine($"shift {shift + 1}, {result.Fault.Label} ({result.Bench}): false {string.Join(", ", result.Cries)}; named {string.Join(", ", result.Named)}");
            }

            var between = HeapMegabytes();
            using var self = Process.GetCurrentProcess();
            var handles = Directory.Exists("/proc/self/fd") ? Directory.GetFiles("/proc/self/fd").Length : self.HandleCount;
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"| {shift + 1} | {(shift + 1) * HaulShift.Hours / 24:F1} | {string.Join(" | ", heaps.Select(heap => heap.ToString("F1", CultureInfo.InvariantCulture)))} | {between:F1} | {self.WorkingSet64 / 1e6:F0} | {handles} | {self.Threads.Count} |"));
        }

        PrintFaults(results);
        using (var store = SoakStore.Open(folder.FullName, TimeProvider.System, StoreMode.Review))
        {
            var runs = store.Runs();
            var hours = shifts * HaulShift.Hours * HaulShift.Benches;
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"\n{runs.Count} runs, {hours:F0} bench-hours, {results.Sum(result => result.Weighed)} polls weighed, {results.Sum(result => result.Stored)} stored ({runs.Sum(run => run.Readings)} of them readings), {runs.Sum(run => run.Lost)} lost; {Stopwatch.GetElapsedTime(start).TotalMinutes:F0} min for {shifts * HaulShift.Hours / 24:F1} simulated days on {HaulShift.Benches} benches."));
        }

        folder.Delete(recursive: true);
        return results.All(result => result.IsFound && result.Weighed == result.Stored) ? 0 : 1;
    }

    private static void PrintFaults(List<HaulResult> results)
    {
        Console.WriteLine("\n| scripted | runs | wanted | came | missed | said besides | false alarms |");
        Console.WriteLine("| --- | --: | --- | --: | --: | --- | --- |");
        foreach (var ofFault in results.GroupBy(result => (result.Fault, Wanted: string.Join(" or ", result.Wanted))))
        {
            var (fault, names) = ofFault.Key;
            var wanted = names.Length == 0 ? "nothing" : names;
            var missed = ofFault.Count(result => !result.IsFound);
            Console.WriteLine($"| {fault.Label} | {ofFault.Count()} | {wanted} | {ofFault.Count() - missed} | {missed} | {Tally(ofFault.SelectMany(result => result.SecondNames))} | {Tally(ofFault.SelectMany(result => result.Cries))} |");
        }
    }

    private static string Tally(IEnumerable<string> names) =>
        string.Join(", ", names.GroupBy(name => name).Select(name => $"{name.Count()} {name.Key}")) is { Length: > 0 } tally ? tally : "none";

    private static double HeapMegabytes()
    {
        GC.Collect();
        GC.WaitForPendingFinalizers();
        return GC.GetTotalMemory(true) / 1e6;
    }
}
