using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;
using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Unattended.Haul;

/// <summary>One bench's share of a shift.</summary>
/// <param name="Fault">What was scripted.</param>
/// <param name="Bench">Unit and meter.</param>
/// <param name="Wanted">One of these had to come; empty: nothing.</param>
/// <param name="Named">What the watch named at the fault or after it, of any severity.</param>
/// <param name="Cries">Warnings and critical findings before the fault, or in a run in which nothing should be said.</param>
/// <param name="Weighed">Polls, with and without a reading, that the soak handed on.</param>
/// <param name="Stored">Readings and missed polls in the store.</param>
internal sealed record HaulResult(HaulFault Fault, string Bench, string[] Wanted, IReadOnlyList<string> Named, IReadOnlyList<string> Cries, long Weighed, long Stored)
{
    /// <summary>A name that was wanted has come, or none was.</summary>
    public bool IsFound => Wanted.Length == 0 || Wanted.Any(Named.Contains);

    /// <summary>What was said beside the wanted name.</summary>
    public IEnumerable<string> SecondNames => Wanted.Length == 0 ? [] : Named.Except(Wanted);
}

/// <summary>A shift of twelve hours on four benches of one host, each with the next fault of the catalogue.</summary>
internal static class HaulShift
{
    public const int Benches = 4;
    public const double Hours = 12;
    public const double PerSecond = 0.2;

    /// <summary>Runs it.</summary>
    /// <param name="shift">Counted from 0.</param>
    /// <param name="folder">The record.</param>
    /// <param name="atRound">Called before each poll.</param>
    public static async Task<List<HaulResult>> RunAsync(int shift, string folder, Action<long> atRound)
    {
        using var time = new Lockstep(1 / PerSecond, atRound);
        var rigs = new List<(SimulatedRig Rig, HaulFault Fault, Scenario Script, double At)>();
        var plans = new List<BenchPlan>();
        for (var bench = 0; bench < Benches; bench++)
        {
            var number = (shift * Benches) + bench;
            var (fault, at) = (HaulFault.Of(number), FaultSeconds(number));
            var script = fault.Script(number, at, PerSecond);
            var rig = new SimulatedRig(script, time, () => new TcpInstrumentPort());
            rigs.Add((rig, fault, script, at));
            plans.Add(Plan(bench, rig, script));
        }

        var documents = await SoakHost.RunAsync(
            plans, folder, time, [time], false, () => time.Begin([.. plans.Select(plan => plan.Name)]), null, new AttendanceOrder(new LampwardenOptions()), CancellationToken.None);
        var results = new List<HaulResult>();
        using (var store = SoakStore.Open(folder, TimeProvider.System, StoreMode.Review))
        {
            foreach (var document in documents)
            {
                var run = store.Run(document.Run!);
                var (_, fault, script, at) = rigs[plans.FindIndex(plan => plan.Name == run.Info.Bench)];
                results.Add(Weigh(fault, script, at, document, time.Weighed(run.Info.Bench), run.Info.Readings + run.Gaps.Sum(gap => gap.Polls)));
            }
        }

        foreach (var (rig, _, _, _) in rigs)
        {
            await rig.DisposeAsync();
        }

        return results;
    }

    private static HaulResult Weigh(HaulFault fault, Scenario script, double atSeconds, SoakDocument document, long weighed, long stored)
    {
        // The watch's zero is switch-on, and a reading covers what came before it: four polls of grace.
        var from = fault.Name == "none" ? double.PositiveInfinity : atSeconds - (4 / PerSecond);
        var alarms = document.Findings.Where(finding => finding.Severity != Severity.Notice);
        var wanted = fault.WantedOf(script.Meter.Dialect);
        return new HaulResult(
            fault,
            $"{script.Unit}, {script.Meter.Dialect}",
            wanted,
            [.. document.Findings.Where(finding => finding.RaisedSeconds >= from).Select(finding => finding.Signature.Text()).Distinct()],
            [.. alarms.Where(finding => (wanted.Length == 0 || finding.RaisedSeconds < from) && finding.Signature.Text() != fault.May).Select(finding => finding.Signature.Text())],
            weighed,
            stored);
    }

    private static BenchPlan Plan(int bench, SimulatedRig rig, Scenario script) => BenchPlan.From(
        new BenchOptions
        {
            Name = string.Create(CultureInfo.InvariantCulture, $"bay-{bench + 1}"),
            Mains = script.Mains,
            Bank = script.Bank,
            Unit = script.Unit,
            Meters = [.. rig.Meters.Select(meter => Impatient(RehearseCommand.MeterFor(meter, script)))],
            Soak = new SoakOptions { PlannedHours = Hours },
        },
        LampInventory.Empty);

    // Patience is real time, and the more of it, the longer the haul.
    private static MeterOptions Impatient(MeterOptions meter)
    {
        meter.ReplyTimeoutSeconds = 0.5;
        return meter;
    }

    /// <summary>Between the third and the tenth hour, so that there is a baseline before it and time to find it after.</summary>
    private static double FaultSeconds(int number) => 10_800 + (number * 7919 % 25_200);
}
