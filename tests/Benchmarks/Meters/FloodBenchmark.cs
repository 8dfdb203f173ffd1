using System.Diagnostics;
using System.Globalization;
using System.IO.Ports;
using Lampwarden.Acquisition;

namespace Lampwarden.Benchmarks.Meters;

/// <summary>Lines a second through the whole session, and through a bare reader of SerialPort.BaseStream that only counts line ends.</summary>
internal static class FloodBenchmark
{
    private const int Lines = 400_000;
    private const int Rounds = 5;

    public static async Task RunAsync()
    {
        var (peer, place) = Peer.Start("flood");
        await BareAsync(peer, place, "soak", Lines / 4); // warm-up of both
        await SessionAsync(peer, place, "soak", Lines / 4);
        Console.WriteLine($"flood: {Lines} lines of 14 bytes over a pseudo-terminal, median of {Rounds} rounds in turn");
        foreach (var kind in (string[])["soak", "different"])
        {
            var (bare, session) = (new List<Run>(), new List<Run>());
            for (var round = 0; round < Rounds; round++)
            {
                bare.Add(await BareAsync(peer, place, kind, Lines));
                session.Add(await SessionAsync(peer, place, kind, Lines));
            }

            Console.WriteLine(kind == "soak" ? " lines of a soak: noise of five counts about a creeping value" : " no line like one of the last 9,999");
            Print("bare BaseStream reader", bare);
            Print("whole session", session);
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"  ratio: {Median(session, run => run.PerSecond) / Median(bare, run => run.PerSecond):0.00} of the bare reader's lines a second, {Median(session, run => run.PerCpuSecond) / Median(bare, run => run.PerCpuSecond):0.00} of its lines per processor-second"));
        }

        peer.StandardInput.Close();
        await peer.WaitForExitAsync();
    }

    private static async Task<Run> BareAsync(Process peer, string place, string kind, int lines)
    {
        using var port = new SerialPort(place, 115200);
        port.Open();
        await using var stream = port.BaseStream;
        var buffer = new byte[8192];
        var count = 0;
        var measure = Measure.Begin();
        peer.StandardInput.WriteLine($"{kind} {lines}");
        while (count < lines)
        {
            var got = await stream.ReadAsync(buffer, CancellationToken.None);
            count += buffer.AsSpan(0, got).Count((byte)'\n');
        }

        return measure.End(lines);
    }

    private static async Task<Run> SessionAsync(Process peer, string place, string kind, int lines)
    {
        var options = new MeterOptions
        {
            Name = "flood",
            ReadingsPerSecond = 100,
            Transport = { Port = place, BaudRate = 115200 },
            Protocol = { Kind = "lines", Pattern = "^(?<coupling>AC|DC) +(?<value>[-+]?[0-9]+[.][0-9]+|O[.]L) +(?<unit>[mu]?[AV])$" },
        };
        await using var session = new MeterSession(options, TimeProvider.System);
        await using var events = session.ReadAsync().GetAsyncEnumerator();
        var moving = events.MoveNextAsync();
        while (!session.Health.Connected)
        {
            await Task.Delay(10);
        }

        var measure = Measure.Begin();
        peer.StandardInput.WriteLine($"{kind} {lines}");
        for (var count = 1; count < lines; count++) // the first line is refused: it might be half of one
        {
            await moving;
            if (events.Current.Kind != MeterEventKind.Reading)
            {
                throw new InvalidOperationException(events.Current.ToString());
            }

            moving = count + 1 < lines ? events.MoveNextAsync() : default;
        }

        return measure.End(lines);
    }

    private static double Median(List<Run> runs, Func<Run, double> of) => runs.Select(of).Order().ElementAt(runs.Count / 2);

    private static void Print(string what, List<Run> runs) => Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
        $"  {what,-24} {Median(runs, run => run.PerSecond),9:0} lines/s  {Median(runs, run => run.PerCpuSecond),9:0} lines per processor-second  {Median(runs, run => run.BytesPerLine),5:0} bytes allocated a line"));

    internal readonly record struct Run(double PerSecond, double PerCpuSecond, double BytesPerLine);

    /// <summary>Wall time, processor time of this process, and allocations.</summary>
    internal readonly record struct Measure(long Wall, TimeSpan Cpu, long Bytes)
    {
        public static Measure Begin() => new(Stopwatch.GetTimestamp(), Environment.CpuUsage.TotalTime, GC.GetTotalAllocatedBytes());

        public Run End(int lines) => new(
            lines / Stopwatch.GetElapsedTime(Wall).TotalSeconds,
            lines / (Environment.CpuUsage.TotalTime - Cpu).TotalSeconds,
            (GC.GetTotalAllocatedBytes() - Bytes) / (double)lines);
    }
}
