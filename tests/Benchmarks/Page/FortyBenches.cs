using System.Diagnostics;
using System.Globalization;
using System.Text.Json;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Page;

/// <summary>The whole service as a process of its own, with 40 benches at 10 readings a second, simulated meters here, and a page looking on.</summary>
internal static class FortyBenches
{
    private const int Benches = 40;

    // Once the soaks have learned their units: until then the watch does more.
    private const int SettleSeconds = 45;
    private const int MeasureSeconds = 60;

    public static async Task RunAsync(Chromium chromium)
    {
        var folder = Directory.CreateTempSubdirectory("lampwarden-forty-");
        var ports = new List<TcpInstrumentPort>();
        var meters = new List<SimulatedMeter>();
        for (var bench = 0; bench < Benches; bench++)
        {
            ports.Add(new TcpInstrumentPort());
            meters.Add(new SimulatedMeter(new SimulatedMeterOptions { CurrentCountSize = 0.0001, NoiseCounts = 2, Seed = bench }, new Steady(0.3064), ports[^1], TimeProvider.System));
        }

        var port = FreePort();
        var config = Path.Combine(folder.FullName, "bench.json");
        await File.WriteAllTextAsync(config, JsonSerializer.Serialize(new
        {
            benches = ports.Select((meter, index) => new
            {
                name = $"bench {index + 1}",
                mains = "120 V 60 Hz",
                bank = "60 W 120 V || 25 W 120 V",
                unit = "resistor 300 ohm",
                meters = new[]
                {
                    new
                    {
                        name = "line", readingsPerSecond = 10, windowSeconds = 0.1, accuracy = new { countSize = 0.0001 },
                        transport = new { kind = "tcp", host = "127.0.0.1", port = meter.Port.ToString(CultureInfo.InvariantCulture) },
                    },
                },
            }),
            recording = new { folder = Path.Combine(folder.FullName, "soaks") },
            web = new { address = $"http://127.0.0.1:{port}" },
        }));
        var program = Path.Combine(AppContext.BaseDirectory, OperatingSystem.IsWindows() ? "lampwarden.exe" : "lampwarden.dll");
        var start = new ProcessStartInfo(program.EndsWith(".dll", StringComparison.Ordinal) ? "dotnet" : program) { RedirectStandardError = true, RedirectStandardOutput = true };
        foreach (var argument in program.EndsWith(".dll", StringComparison.Ordinal) ? [program, "watch", "--config", config] : new[] { "watch", "--config", config })
        {
            start.ArgumentList.Add(argument);
        }

        using var service = Process.Start(start)!;
        _ = service.StandardOutput.ReadToEndAsync();
        _ = service.StandardError.ReadToEndAsync();
        try
        {
            await Task.Delay(TimeSpan.FromSeconds(SettleSeconds));
            Console.WriteLine("Forty benches at 10 readings/s (share of one core, the service's own process):");
            await MeasureAsync(service, "nobody looks on", port);
            await chromium.GoAsync(new Uri($"http://127.0.0.1:{port}/#/benches"));
            await MeasureAsync(service, "a page shows the 40 tiles", port);
            Console.WriteLine("  tiles shown: " + (await chromium.AskAsync("document.querySelectorAll('.tile').length")).GetInt32());
        }
        finally
        {
            service.Kill(entireProcessTree: true);
            await service.WaitForExitAsync();
            foreach (var meter in meters)
            {
                await meter.DisposeAsync();
            }

            foreach (var wire in ports)
            {
                await wire.DisposeAsync();
            }

            folder.Delete(recursive: true);
        }
    }

    private static async Task MeasureAsync(Process service, string how, int port)
    {
        using var http = new HttpClient { BaseAddress = new Uri($"http://127.0.0.1:{port}") };
        var before = await ReadingsAsync(http);
        service.Refresh();
        var (cpu, watch) = (service.TotalProcessorTime, Stopwatch.StartNew());
        await Task.Delay(TimeSpan.FromSeconds(MeasureSeconds));
        service.Refresh();
        var share = (service.TotalProcessorTime - cpu) / watch.Elapsed;
        var rate = (await ReadingsAsync(http) - before) / watch.Elapsed.TotalSeconds;
        Console.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"  {how}: {share:P1}, {rate:F0} readings/s taken, {service.WorkingSet64 / 1e6:F0} MB, load average {PageCommand.LoadAverage()}"));
    }

    private static async Task<double> ReadingsAsync(HttpClient http) =>
        JsonSerializer.Deserialize<JsonElement>(await http.GetStringAsync(new Uri("/api/meters", UriKind.Relative))).EnumerateArray().Sum(meter => meter.GetProperty("readings").GetDouble());

    private static int FreePort()
    {
        using var listener = new System.Net.Sockets.TcpListener(System.Net.IPAddress.Loopback, 0);
        listener.Start();
        return ((System.Net.IPEndPoint)listener.LocalEndpoint).Port;
    }

    private sealed class Steady(double amps) : ISimulatedQuantity
    {
        public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) => amps;
    }
}
