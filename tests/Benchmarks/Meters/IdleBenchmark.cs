using System.Diagnostics;
using System.Globalization;
using System.IO.Ports;
using Lampwarden.Acquisition;

namespace Lampwarden.Benchmarks.Meters;

/// <summary>Processor time of a session that asks ten times a second, above that of the same port lying open.</summary>
internal static class IdleBenchmark
{
    private const double RoundSeconds = 15;
    private const int Rounds = 3;

    public static async Task RunAsync()
    {
        var (peer, place) = Peer.Start("scpi");
        var idle = new List<double>();
        var asking = new List<double>();
        var bare = new List<double>();
        await SessionAsync(place, 3); // warm-up
        for (var round = 0; round < Rounds; round++)
        {
            idle.Add(await OpenPortAsync(place));
            bare.Add(await BareAsync(place));
            asking.Add(await SessionAsync(place, RoundSeconds));
        }

        peer.StandardInput.Close();
        await peer.WaitForExitAsync();
        var (low, high) = (Median(idle), Median(asking));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"idle: share of one core over {RoundSeconds} s, median of {Rounds} rounds in turn"));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  open port, a read pending   {low:0.00} %"));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  bare questions, 10 a second {Median(bare):0.00} %"));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  session at 10 readings/s    {high:0.00} %"));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"  the session above the open port {high - low:0.00} %, above the bare questions {high - Median(bare):0.00} % of a core"));
    }

    private static async Task<double> OpenPortAsync(string place)
    {
        using var port = new SerialPort(place, 115200);
        port.Open();
        await using var stream = port.BaseStream;
        using var stop = new CancellationTokenSource();
        var pending = stream.ReadAsync(new byte[256], stop.Token).AsTask();
        var share = await ShareAsync(RoundSeconds);
        await stop.CancelAsync();
        await ((Task)pending).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
        return share;
    }

    /// <summary>The least that asking can cost: write the question, read until the line ends, sleep.</summary>
    private static async Task<double> BareAsync(string place)
    {
        using var port = new SerialPort(place, 115200);
        port.Open();
        await using var stream = port.BaseStream;
        using var stop = new CancellationTokenSource();
        var asking = Task.Run(async () =>
        {
            var buffer = new byte[256];
            while (!stop.IsCancellationRequested)
            {
                await stream.WriteAsync("READ?\n"u8.ToArray(), CancellationToken.None);
                while (!buffer.AsSpan(0, await stream.ReadAsync(buffer, CancellationToken.None)).Contains((byte)'\n'))
                {
                }

                await Task.Delay(100, CancellationToken.None);
            }
        });
        var share = await ShareAsync(RoundSeconds);
        await stop.CancelAsync();
        await asking;
        return share;
    }

    private static async Task<double> SessionAsync(string place, double seconds)
    {
        var options = new MeterOptions { Name = "idle", ReadingsPerSecond = 10, WindowSeconds = 0.1, Transport = { Port = place, BaudRate = 115200 } };
        await using var session = new MeterSession(options, TimeProvider.System);
        using var stop = new CancellationTokenSource();
        var reading = Task.Run(async () =>
        {
            var count = 0;
            await foreach (var one in session.ReadAsync(stop.Token))
            {
                count += one.Kind == MeterEventKind.Reading ? 1 : 0;
            }

            return count;
        });
        await Task.Delay(500);
        var share = await ShareAsync(seconds);
        await stop.CancelAsync();
        await ((Task)reading).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
        var health = session.Health;
        return health.Readings >= 9 * seconds ? share : throw new InvalidOperationException($"only {health.Readings} readings in {seconds} s");
    }

    private static async Task<double> ShareAsync(double seconds)
    {
        var (cpu, wall) = (Environment.CpuUsage.TotalTime, Stopwatch.GetTimestamp());
        await Task.Delay(TimeSpan.FromSeconds(seconds));
        return 100 * (Environment.CpuUsage.TotalTime - cpu) / Stopwatch.GetElapsedTime(wall);
    }

    private static double Median(List<double> values) => values.Order().ElementAt(values.Count / 2);
}
