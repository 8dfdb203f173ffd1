using System.Diagnostics;
using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary><c>shop</c>: the whole service with many benches at ten readings a second, their meters in another process; what grows with benches.</summary>
internal static class ShopCommand
{
    private const double PerSecond = 10;
    private const double SettleSeconds = 12;

    public static async Task<int> RunAsync(string[] args)
    {
        var seconds = args is ["--seconds", var text, ..] ? double.Parse(text, CultureInfo.InvariantCulture) : 30;
        int[] sizes = args is [_, _, "--benches", var list] ? [.. list.Split(',').Select(size => int.Parse(size, CultureInfo.InvariantCulture))] : [5, 10, 20, 40, 80];
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{Environment.ProcessorCount} cores; {PerSecond} readings/s a bench; {seconds} s measured after {SettleSeconds} s of settling"));
        Console.WriteLine("| benches | readings/s | gaps | refused | core used | handling p50 ms | p99 ms | longest ms | memory MB | threads | alerts |");
        Console.WriteLine("| --: | --: | --: | --: | --: | --: | --: | --: | --: | --: | --: |");
        foreach (var size in sizes)
        {
            await OneAsync(size, seconds);
        }

        return 0;
    }

    /// <summary>The meters' process: as many TCP meters as asked for, each over a calm unit.</summary>
    public static async Task<int> PeerAsync(string[] args)
    {
        var ports = Enumerable.Range(0, int.Parse(args[0], CultureInfo.InvariantCulture)).Select(_ => new TcpInstrumentPort()).ToList();
        var meters = ports.Select((port, index) => new SimulatedMeter(new SimulatedMeterOptions { Seed = index + 1, NoiseCounts = 3 }, new Calm(), port, TimeProvider.System)).ToList();
        Console.WriteLine(string.Join(' ', ports.Select(port => port.Port)));
        await Console.In.ReadToEndAsync();
        foreach (var meter in meters)
        {
            await meter.DisposeAsync();
        }

        return 0;
    }

    private static async Task OneAsync(int benches, double seconds)
    {
        var start = new ProcessStartInfo(Environment.ProcessPath!, ["shop-peer", benches.ToString(CultureInfo.InvariantCulture)]) { RedirectStandardInput = true, RedirectStandardOutput = true };
        using var peer = Process.Start(start)!;
        var ports = (await peer.StandardOutput.ReadLineAsync())!.Split(' ');
        var folder = Directory.CreateTempSubdirectory("lw-shop-");
        var plans = ports.Select((port, index) => BenchPlan.From(
            new BenchOptions
            {
                Name = string.Create(CultureInfo.InvariantCulture, $"bay-{index + 1}"),
                Mains = "230 V 50 Hz",
                Bank = "150 W",
                Unit = "resistor 900 ohm",
                Meters = [new MeterOptions { Name = "line", ReadingsPerSecond = PerSecond, WindowSeconds = 0.1, Transport = new TransportOptions { Kind = "tcp", Port = port } }],
            },
            LampInventory.Empty)).ToList();
        Calm.Amps = plans[0].Prediction.Steady.LineAmps;
        var gauge = new Gauge();
        using var stop = new CancellationTokenSource();
        var running = SoakHost.RunAsync(plans, folder.FullName, TimeProvider.System, [gauge], false, null, null, new AttendanceOrder(new LampwardenOptions()), stop.Token);
        await Task.Delay(TimeSpan.FromSeconds(SettleSeconds));
        using var self = Process.GetCurrentProcess();
        var (before, stamp) = (self.TotalProcessorTime, Stopwatch.GetTimestamp());
        gauge.Begin();
        await Task.Delay(TimeSpan.FromSeconds(seconds));
        var (latencies, gaps, alerts) = gauge.End();
        self.Refresh();
        var elapsed = Stopwatch.GetElapsedTime(stamp).TotalSeconds;
        var core = (self.TotalProcessorTime - before).TotalSeconds / elapsed;
        var (memory, threads) = (self.WorkingSet64 / 1e6, self.Threads.Count);
        await stop.CancelAsync();
        var documents = await running;
        peer.StandardInput.Close();
        await peer.WaitForExitAsync();
        var polls = documents.Sum(document => document.Readings);
        long stored, lost;
        using (var store = SoakStore.Open(folder.FullName, TimeProvider.System, StoreMode.Review))
        {
            var runs = store.Runs();
            (stored, lost) = (runs.Sum(run => run.Readings), runs.Sum(run => run.Lost));
        }

        BrokenPromiseException.Unless(stored == polls && lost == 0, $"{polls} readings taken, {stored} stored, {lost} lost");
        folder.Delete(recursive: true);
        Array.Sort(latencies);
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"| {benches} | {latencies.Length / elapsed:F0} | {gaps} | {lost} | {core:P0} | {At(0.5):F2} | {At(0.99):F2} | {At(1):F1} | {memory:F0} | {threads} | {alerts} |"));

        double At(double share) => latencies[(int)(share * (latencies.Length - 1))] * 1000;
    }

    private sealed class Calm : ISimulatedQuantity
    {
        public static double Amps { get; set; } = 0.2475;

        public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) => Amps;
    }

    private sealed class Gauge : ISoakListener
    {
        private readonly Lock _gate = new();
        private List<double>? _latencies;
        private int _gaps;
        private int _alerts;

        public void Begin()
        {
            lock (_gate)
            {
                _latencies = new List<double>(100_000);
            }
        }

        public (double[] Latencies, int Gaps, int Alerts) End()
        {
            lock (_gate)
            {
                var result = (_latencies!.ToArray(), _gaps, _alerts);
                _latencies = null;
                return result;
            }
        }

        public void Hear(SoakEvent happened)
        {
            lock (_gate)
            {
                if (_latencies is not null && happened is Observed observed)
                {
                    if (observed.Observation.IsGap)
                    {
                        _gaps++;
                    }
                    else
                    {
                        _latencies.Add((DateTimeOffset.UtcNow - observed.Utc).TotalSeconds);
                    }
                }

                _alerts += happened is AlertChanged ? 1 : 0;
            }
        }
    }
}
