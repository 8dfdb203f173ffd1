using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Host.Recording;

namespace Lampwarden.Benchmarks.Meters;

/// <summary>
/// A thousand TCP meters at ten readings a second, each into its own run of one store. Measured is the time from the arrival of an answer's
/// first byte to the moment the recorder has taken the reading; the recorder's group commit follows within a second.
/// </summary>
internal static class CrowdBenchmark
{
    private const int Meters = 1000;
    private const double PerSecond = 10;
    private const double SettleSeconds = 15;
    private const double MeasureSeconds = 30;

    public static async Task RunAsync()
    {
        var (peer, says) = Peer.Start("crowd", Meters.ToString(CultureInfo.InvariantCulture));
        var folder = Directory.CreateTempSubdirectory("lampwarden-crowd-").FullName;
        var time = TimeProvider.System;
        using var store = SoakStore.Open(folder, time);
        var origin = time.GetTimestamp();
        using var stop = new CancellationTokenSource();
        var crowd = says.Split(' ').Select((port, index) => Task.Run(() => OneAsync(port, index, store, time, origin, stop.Token))).ToList();
        await Task.Delay(TimeSpan.FromSeconds(SettleSeconds + MeasureSeconds));
        await stop.CancelAsync();
        var results = await Task.WhenAll(crowd);
        peer.StandardInput.Close();
        await peer.WaitForExitAsync();

        var latencies = results.SelectMany(one => one.Latencies).Order().ToArray();
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"crowd: {Meters} TCP meters at {PerSecond} readings/s for {MeasureSeconds} s, each into a run of one store"));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"  readings {latencies.Length} ({latencies.Length / MeasureSeconds:0} a second), gaps {results.Sum(one => one.Gaps)}, refused by the recorder {results.Sum(one => one.Refused)}"));
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"  arrival to recorded: median {At(latencies, 0.5):0.00} ms, p99 {At(latencies, 0.99):0.00} ms, p99.9 {At(latencies, 0.999):0.00} ms, longest {latencies[^1] * 1000:0.0} ms"));
        Directory.Delete(folder, recursive: true);
    }

    private static async Task<Result> OneAsync(string port, int index, SoakStore store, TimeProvider time, long origin, CancellationToken stop)
    {
        var options = new MeterOptions
        {
            Name = string.Create(CultureInfo.InvariantCulture, $"meter-{index}"),
            ReadingsPerSecond = PerSecond,
            WindowSeconds = 0.1,
            ReplyTimeoutSeconds = 5,
            Transport = { Kind = "tcp", Port = port },
        };
        var recorder = await store.BeginRunAsync(new RunStart { Bench = options.Name, Unit = "resistor 300 ohm", Bank = "60 W", Mains = "120 V 60 Hz" }, CancellationToken.None);
        var latencies = new List<double>((int)(MeasureSeconds * PerSecond * 1.1));
        var (gaps, refused) = (0, 0);
        await using var session = new MeterSession(options, time, originStamp: origin);
        try
        {
            await Task.Delay(index * 10, CancellationToken.None); // a shop does not switch all its meters on in one millisecond
            await foreach (var one in session.ReadAsync(stop))
            {
                var measured = one.ElapsedSeconds > SettleSeconds;
                if (one.Kind == MeterEventKind.Gap)
                {
                    gaps += measured ? 1 : 0;
                    continue;
                }

                refused += recorder.Append(new LineReading(one.ElapsedSeconds, one.Value, one.Digits)) ? 0 : 1;
                if (measured)
                {
                    latencies.Add(time.GetElapsedTime(origin).TotalSeconds - one.ElapsedSeconds);
                }
            }
        }
        catch (OperationCanceledException)
        {
            // The time is over.
        }

        return new Result(latencies, gaps, refused);
    }

    private static double At(double[] sorted, double share) => sorted[(int)(share * (sorted.Length - 1))] * 1000;

    private sealed record Result(List<double> Latencies, int Gaps, int Refused);
}
