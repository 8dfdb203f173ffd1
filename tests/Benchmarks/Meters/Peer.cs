using System.Diagnostics;
using System.Text;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Meters;

/// <summary>
/// Meters in a process of their own, so that their work is not counted as ours. Started as <c>meters-peer KIND ...</c>; says where its meters
/// are on standard output and ends when its standard input does.
/// </summary>
internal static class Peer
{
    private const int BlockLines = 10_000;

    /// <summary>What a peer process does.</summary>
    public static async Task<int> RunAsync(string[] args)
    {
        switch (args)
        {
            case ["flood"]:
                await FloodAsync();
                return 0;
            case ["scpi"]:
                await using (var port = new PseudoTerminal())
                await using (var meter = new SimulatedMeter(new SimulatedMeterOptions(), new Ramp(), port, TimeProvider.System))
                {
                    Console.WriteLine(port.Place);
                    await Console.In.ReadToEndAsync();
                }

                return 0;
            case ["crowd", var count]:
                await CrowdAsync(int.Parse(count, System.Globalization.CultureInfo.InvariantCulture));
                return 0;
            default:
                return 2;
        }
    }

    /// <summary>Starts a peer and reads what it says first.</summary>
    public static (Process Process, string Says) Start(params string[] args)
    {
        var start = new ProcessStartInfo(Environment.ProcessPath!) { RedirectStandardInput = true, RedirectStandardOutput = true };
        foreach (var arg in (string[])["meters-peer", .. args])
        {
            start.ArgumentList.Add(arg);
        }

        var process = Process.Start(start)!;
        return (process, process.StandardOutput.ReadLine() ?? throw new IOException("the peer process ended at once"));
    }

    /// <summary>For every line of input holding a number, sends so many lines as fast as they are taken.</summary>
    private static async Task FloodAsync()
    {
        await using var port = new PseudoTerminal();
        Console.WriteLine(port.Place);
        var (soak, different) = (Block(soak: true), Block(soak: false));
        while (await Console.In.ReadLineAsync() is { } wanted)
        {
            var words = wanted.Split(' ');
            for (var sent = 0; sent < int.Parse(words[1], System.Globalization.CultureInfo.InvariantCulture); sent += BlockLines)
            {
                await port.WriteAsync(words[0] == "soak" ? soak : different, CancellationToken.None);
            }
        }
    }

    /// <summary>Lines of a soak: noise of five counts about a value that creeps; or lines of which no two are the same.</summary>
    private static byte[] Block(bool soak)
    {
        var random = new Random(5);
        var lines = new StringBuilder();
        for (var line = 0; line < BlockLines; line++)
        {
            var noise = Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(Math.Tau * random.NextDouble());
            var counts = soak ? 4125 + (line * 200 / BlockLines) + (int)Math.Round(5 * noise) : line;
            lines.Append("AC 0.").Append(counts.ToString("0000", System.Globalization.CultureInfo.InvariantCulture)).Append(" A\r\n");
        }

        return Encoding.ASCII.GetBytes(lines.ToString());
    }

    private static async Task CrowdAsync(int count)
    {
        var ports = Enumerable.Range(0, count).Select(_ => new TcpInstrumentPort()).ToList();
        var meters = ports.Select(port => new SimulatedMeter(new SimulatedMeterOptions(), new Ramp(), port, TimeProvider.System)).ToList();
        Console.WriteLine(string.Join(' ', ports.Select(port => port.Port)));
        await Console.In.ReadToEndAsync();
        foreach (var meter in meters)
        {
            await meter.DisposeAsync();
        }
    }

    private sealed class Ramp : ISimulatedQuantity
    {
        public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) => 0.4 + (simulatedSeconds % 10 * 0.01);
    }
}
