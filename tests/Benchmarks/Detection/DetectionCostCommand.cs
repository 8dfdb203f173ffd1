using System.Diagnostics;
using Lampwarden.Analysis.Watching;
using static System.FormattableString;

namespace Lampwarden.Benchmarks.Detection;

/// <summary>What the watch costs: time a reading, bytes allocated once settled, size of its state. One quiet day at several rates.</summary>
public static class DetectionCostCommand
{
    public static int Run()
    {
        Console.WriteLine("| readings/s | microseconds a reading | bytes allocated after the first hour | state, bytes |");
        Console.WriteLine("| --- | --- | --- | --- |");
        Measure(2); // the compiler's work is not the watch's
        foreach (var rate in new[] { 1.0, 2, 10, 50 })
        {
            var (micros, bytes, state) = Measure(rate);
            Console.WriteLine(Invariant($"| {rate} | {micros:0.00} | {bytes} | {state} |"));
        }

        return 0;
    }

    private static (double Micros, long Bytes, int State) Measure(double rate)
    {
        var run = new CorpusRun();
        run.Generate(new CorpusOptions(1, Rate: rate) { Clean = true }, 1, Fault.Nothing);
        var detector = new WatchDetector();
        detector.Start(run, mainsMeasured: true);
        var first = (int)(2 * 3600 * rate);
        Feed(detector.Watch, run, 0, first);
        var before = GC.GetAllocatedBytesForCurrentThread();
        var clock = Stopwatch.GetTimestamp();
        var last = Math.Min(run.Count, first + 600_000);
        if (!double.IsNaN(run.AnnouncedSeconds))
        {
            last = Math.Min(last, (int)(run.AnnouncedSeconds * rate));
        }

        Feed(detector.Watch, run, first, last);
        var micros = Stopwatch.GetElapsedTime(clock).TotalMicroseconds / (last - first);
        var bytes = GC.GetAllocatedBytesForCurrentThread() - before;
        return (micros, bytes, detector.Watch.Save().Length);
    }

    private static void Feed(Watch watch, CorpusRun run, int from, int to)
    {
        for (var i = from; i < to; i++)
        {
            watch.Observe(new Observation(run.Seconds(i), run.Amps[i], run.Volts[i]));
        }
    }
}
