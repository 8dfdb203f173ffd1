using System.Globalization;
using Lampwarden.Fuzzing;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Meters;

/// <summary><c>fuzz-meters [--lines N] [--seed S]</c> and <c>fuzz-session [--minutes M] [--seed S]</c>: the long forms of two tests.</summary>
internal static class FuzzCommands
{
    public static int Meters(string[] args)
    {
        var (lines, seed) = ((long)Value(args, "--lines", 5e6), (int)Value(args, "--seed", Environment.TickCount & 0xFFFF));
        Console.WriteLine($"{lines} random and spoilt lines through each parser, seed {seed}");
        var before = Memory();
        var bad = false;
        foreach (var outcome in ParserFuzz.Run(lines, seed))
        {
            bad |= outcome.Wrong is not null;
            Console.WriteLine($"  {outcome.Parser,-9} {outcome.Lines} lines, {outcome.Numbers} taken, {(outcome.Wrong is null ? "none wrongly" : "WRONG: " + outcome.Wrong)}");
        }

        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  memory grew by {(Memory() - before) / 1024.0:0} KiB"));
        return bad ? 1 : 0;
    }

    public static async Task<int> SessionAsync(string[] args)
    {
        var (minutes, seed) = (Value(args, "--minutes", 10), (int)Value(args, "--seed", Environment.TickCount & 0xFFFF));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{minutes} minutes of noise through whole sessions, seed {seed}"));
        var before = Memory();
        var runs = await Task.WhenAll(
            One("scpi over a pseudo-terminal", new PseudoTerminal(), "scpi", 1),
            One("scpi over TCP", new TcpInstrumentPort(), "scpi", 2),
            One("words over a pseudo-terminal", new PseudoTerminal(), "words", 3),
            One("columns over TCP", new TcpInstrumentPort(), "columns", 4));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  memory grew by {(Memory() - before) / 1024.0:0} KiB, {System.Diagnostics.Process.GetCurrentProcess().Threads.Count} threads at the end"));
        return runs.All(good => good) ? 0 : 1;

        async Task<bool> One(string name, IInstrumentPort port, string dialect, int more)
        {
            await using (port)
            {
                var outcome = await new SessionFuzz(port, dialect, seed + more).RunAsync(TimeSpan.FromMinutes(minutes), CancellationToken.None);
                Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                    $"  {name,-29} {outcome.BytesSent} bytes, {outcome.Events} events: {outcome.Readings} readings, {outcome.Gaps} gaps, {outcome.Openings} openings, longest wait for an event {outcome.LongestSilenceSeconds:0.0} s, {outcome.Wrong ?? "no wrong number"}"));
                return outcome.Wrong is null;
            }
        }
    }

    private static long Memory()
    {
        GC.Collect();
        GC.WaitForPendingFinalizers();
        return GC.GetTotalMemory(forceFullCollection: true);
    }

    private static double Value(string[] args, string name, double otherwise)
    {
        var at = Array.IndexOf(args, name);
        return at >= 0 && at + 1 < args.Length ? double.Parse(args[at + 1], CultureInfo.InvariantCulture) : otherwise;
    }
}
