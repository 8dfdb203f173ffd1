using System.Collections.Concurrent;
using System.Diagnostics;
using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;
using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;
using Microsoft.Extensions.Time.Testing;
using MeterTrouble = Lampwarden.Simulator.Instruments.MeterTrouble;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>
/// <c>long-haul</c>: simulated shifts of twelve hours on four benches in one process, each bench with another fault of the
/// catalogue or none: is everything found, does anything cry wolf, does anything grow?
/// </summary>
internal static class LongHaulCommand
{
    private const double ShiftHours = 12;
    private const double PerSecond = 0.2;

    private static readonly (string Fault, string[] Finds)[] Catalogue =
    [
        ("none", []),
        ("hard-short", ["hard-short"]),
        ("developing-short", ["developing-short", "hard-short", "runaway"]),
        ("open", ["open-circuit"]),
        ("lamp-out", ["lamp-out"]),
        // Without a meter on the mains nobody can tell it from a change of the unit: either name is right.
        ("mains-step", ["mains-shift", "off-prediction"]),
        ("meter-unplugged", ["meter-silent"]),
        ("silent", ["meter-silent"]),
        ("garbled", ["meter-silent"]),
    ];

    public static async Task<int> RunAsync(string[] args)
    {
        var shifts = args is ["--shifts", var count, ..] ? int.Parse(count, CultureInfo.InvariantCulture) : 60;
        var folder = Directory.CreateTempSubdirectory("lw-haul-");
        var (found, missed, wolf, also, polls) = (0, 0, 0, 0, 0L);
        var start = Stopwatch.GetTimestamp();
        Console.WriteLine("| shift | simulated days | heap MB | handles | threads | found | missed | false alarms | second names |");
        Console.WriteLine("| --: | --: | --: | --: | --: | --: | --: | --: | --: |");
        for (var shift = 0; shift < shifts; shift++)
        {
            var results = await ShiftAsync(shift, folder.FullName);
            foreach (var (fault, at, document, asked) in results)
            {
                polls += asked;
                // What is said after the scripted fault is about it, if not by its best name; what is said before it, or without one, is a false alarm.
                var raised = document.Findings.Where(finding => finding.Severity != Severity.Notice).ToList();
                var alarms = raised.Select(finding => finding.Signature.Text()).ToHashSet();
                var wanted = Catalogue.First(one => one.Fault == fault).Finds;
                var hit = wanted.Length == 0 || wanted.Any(alarms.Contains);
                (found, missed) = wanted.Length == 0 ? (found, missed) : hit ? (found + 1, missed) : (found, missed + 1);
                var cries = raised.Where(finding => wanted.Length == 0 || finding.RaisedSeconds < at).Select(finding => finding.Signature.Text()).ToList();
                wolf += cries.Count;
                also += alarms.Except(wanted).Except(cries).Count();
                if (!hit || cries.Count > 0)
                {
                    Console.Error.WriteLine($"shift {shift + 1}, {fault}: false {string.Join(", ", cries)}; all {string.Join(", ", alarms)}");
                }
            }

            GC.Collect();
            GC.WaitForPendingFinalizers();
            GC.Collect();
            using var self = Process.GetCurrentProcess();
            var handles = Directory.Exists("/proc/self/fd") ? Directory.GetFiles("/proc/self/fd").Length : self.HandleCount;
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"| {shift + 1} | {(shift + 1) * ShiftHours / 24:F1} | {GC.GetTotalMemory(true) / 1e6:F1} | {handles} | {self.Threads.Count} | {found} | {missed} | {wolf} | {also} |"));
        }

        using (var store = SoakStore.Open(folder.FullName, TimeProvider.System, StoreMode.Review))
        {
            var runs = store.Runs();
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"\n{runs.Count} runs, {runs.Sum(run => run.Readings)} readings stored, {runs.Sum(run => run.Lost)} lost, {polls} polls answered; {Stopwatch.GetElapsedTime(start).TotalMinutes:F0} min for {shifts * ShiftHours / 24:F1} simulated days on 4 benches."));
        }

        folder.Delete(recursive: true);
        return missed == 0 ? 0 : 1;
    }

    private static async Task<List<(string Fault, double At, SoakDocument Document, int Asked)>> ShiftAsync(int shift, string folder)
    {
        using var time = new Lockstep();
        var rigs = new List<(SimulatedRig Rig, string Fault)>();
        var plans = new List<BenchPlan>();
        for (var bench = 0; bench < 4; bench++)
        {
            var number = (shift * 4) + bench;
            var fault = Catalogue[number % Catalogue.Length].Fault;
            var rig = new SimulatedRig(Script(number, fault), time, () => new TcpInstrumentPort());
            rigs.Add((rig, fault));
            plans.Add(BenchPlan.From(
                new BenchOptions
                {
                    Name = string.Create(CultureInfo.InvariantCulture, $"bay-{bench + 1}"),
                    Mains = "230 V 50 Hz",
                    Bank = "100 W || 100 W",
                    Unit = "resistor 700 ohm",
                    Meters = [new MeterOptions { Name = "line", ReadingsPerSecond = PerSecond, ReplyTimeoutSeconds = 0.5, Transport = new TransportOptions { Kind = "tcp", Port = rig.Meters[0].Place.Split(':')[1] } }],
                    Soak = new SoakOptions { PlannedHours = ShiftHours },
                },
                LampInventory.Empty));
        }

        var documents = await SoakHost.RunAsync(plans, folder, time, [time], false, () => time.Begin([.. plans.Select(plan => plan.Name)]), null, new AttendanceOrder(new LampwardenOptions()), CancellationToken.None);
        var results = new List<(string, double, SoakDocument, int)>();
        foreach (var document in documents)
        {
            string bench;
            using (var store = SoakStore.Open(folder, TimeProvider.System, StoreMode.Review))
            {
                bench = store.Run(document.Run!).Info.Bench;
            }

            var place = plans.FindIndex(plan => plan.Name == bench);
            var (rig, fault) = rigs[place];
            results.Add((fault, FaultSeconds((shift * 4) + place) - 20, document, rig.Asked));
        }

        foreach (var (rig, _) in rigs)
        {
            await rig.DisposeAsync();
        }

        return results;
    }

    /// <summary>Between the third and the tenth hour, so that there is a baseline before it and time to find it after.</summary>
    private static double FaultSeconds(int number) => 10_800 + (number * 7919 % 25_200);

    private static Scenario Script(int number, string fault)
    {
        var scenario = new Scenario { Name = "haul", Mains = "230 V 50 Hz", Bank = "100 W || 100 W", Unit = "resistor 700 ohm", SwitchOnSeconds = 1, EndSeconds = 60_000, Seed = number + 1 };
        scenario.Meter.ReadingsPerSecond = PerSecond;
        var at = FaultSeconds(number);
        switch (fault)
        {
            case "none":
                break;
            case "silent" or "garbled":
                scenario.Meter.Troubles.Add(new ScheduledTrouble { Kind = fault == "silent" ? MeterTrouble.Silent : MeterTrouble.Garbled, AtSeconds = at, ForSeconds = 600 });
                break;
            default:
                scenario.Faults.Add(new ScenarioFault { Kind = fault, AtSeconds = at, Minutes = 30, ForSeconds = fault == "meter-unplugged" ? 600 : 0, Percent = -12, Lamp = 1 });
                break;
        }

        return scenario;
    }

    /// <summary>
    /// A clock that goes on one poll at a time, when every bench has handled the last: as fast as the computer can, and no
    /// faster, so that its hurry is never taken for a silent meter.
    /// </summary>
    private sealed class Lockstep() : FakeTimeProvider(TimeProvider.System.GetUtcNow()), ISoakListener, IDisposable
    {
        private static readonly TimeSpan Patience = TimeSpan.FromSeconds(2);

        private readonly ConcurrentDictionary<string, long> _handled = new();
        private readonly SemaphoreSlim _progress = new(0);

        public void Dispose() => _progress.Dispose();

        public void Begin(string[] benches)
        {
            foreach (var bench in benches)
            {
                _handled.TryAdd(bench, 0);
            }

            _ = Task.Run(async () =>
            {
                for (var round = 1L; !_handled.IsEmpty; round++)
                {
                    Advance(TimeSpan.FromSeconds(1 / PerSecond));
                    var stamp = Stopwatch.GetTimestamp();
                    while (_handled.Values.Any(count => count < round) && Stopwatch.GetElapsedTime(stamp) < Patience)
                    {
                        await _progress.WaitAsync(Patience);
                    }

                    // A bench that had nothing to handle (its port is being opened again) is not waited for twice.
                    foreach (var late in _handled.Where(pair => pair.Value < round).ToList())
                    {
                        _handled.TryUpdate(late.Key, round, late.Value);
                    }
                }
            });
        }

        public void Hear(SoakEvent happened)
        {
            if (happened is RunEnded)
            {
                _handled.TryRemove(happened.Bench, out _);
            }
            else if (happened is Observed or WaitingForSwitchOn && _handled.TryGetValue(happened.Bench, out var count))
            {
                _handled.TryUpdate(happened.Bench, count + 1, count);
            }

            _progress.Release();
        }
    }
}
