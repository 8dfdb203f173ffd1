using System.Diagnostics;
using System.Globalization;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary><c>faults</c>: injects every fault of the campaign into the real service and prints the table of docs/faults.md.</summary>
internal static class FaultsCommand
{
    public static async Task<int> RunAsync(string[] args)
    {
        var only = args.Length == 2 && args[0] == "--only" ? args[1] : null;
        Fault[] faults = [.. MeterFaults.All, .. StoreFaults.All, .. RouteFaults.All, .. ProcessFaults.All];
        Console.WriteLine("| # | what | injected | promised | happened |");
        Console.WriteLine("| --: | --- | --- | --- | --- |");
        var (kept, broken, skipped) = (0, 0, 0);
        for (var number = 1; number <= faults.Length; number++)
        {
            var fault = faults[number - 1];
            if (only is not null && !$"{fault.Area} {fault.Injected}".Contains(only, StringComparison.OrdinalIgnoreCase))
            {
                continue;
            }

            var start = Stopwatch.GetTimestamp();
            string happened;
            try
            {
                happened = await fault.Run();
                kept++;
            }
            catch (NotHereException reason)
            {
                happened = $"NOT RUN: {reason.Message}";
                skipped++;
            }
            catch (Exception error)
            {
                happened = $"**BROKEN**: {error.Message}";
                broken++;
            }

            Console.WriteLine($"| {number.ToString(CultureInfo.InvariantCulture)} | {fault.Area} | {fault.Injected} | {fault.Promised} | {happened.Replace("|", "\\|").Replace('\n', ' ')} |");
            Console.Error.WriteLine($"{number}: {Stopwatch.GetElapsedTime(start).TotalSeconds:F0} s");
        }

        Console.WriteLine();
        Console.WriteLine($"{kept} promises kept, {broken} broken, {skipped} not run here.");
        return broken == 0 ? 0 : 1;
    }
}
