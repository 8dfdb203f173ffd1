using System.Diagnostics;
using System.Globalization;
using Lampwarden.Analysis.Checks;
using Lampwarden.Analysis.Choosing;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Tests.Netlists;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Benchmarks.Physics;

/// <summary>
/// <c>physics</c>: the speed of the model as ratios within one run: against real time, against ngspice on the same circuit, against a limit.
/// Each figure is the best of several repetitions, so that a busy machine disturbs least.
/// </summary>
internal static class PhysicsCommand
{
    private const int Repetitions = 12;

    private static readonly Mains Mains120 = new(120, 60);

    public static int Run()
    {
        var bank = Bank.Parse(string.Join(" || ", Enumerable.Range(0, 20).Select(lamp => string.Create(CultureInfo.InvariantCulture, $"{25 + 5 * lamp} W"))), Mains120);
        var unit = new ResistorUnit("unit", 20);
        Console.WriteLine("| figure | measured | asked for |");
        Console.WriteLine("|---|---|---|");
        OperatingPoint(bank, unit);
        var ours = Stepping(bank, unit);
        AgainstNgspice(bank, unit, ours);
        Choosing();
        return 0;
    }

    private static void OperatingPoint(Bank bank, ResistorUnit unit)
    {
        var solver = new SteadySolver(bank, unit.NewResponse(Mains120));
        var sum = 0.0;
        var warm = Best(() =>
        {
            for (var turn = 0; turn < 2000; turn++)
            {
                sum += solver.Solve(100 + turn % 40).Amps;
            }
        }) / 2000;
        var fresh = Best(() =>
        {
            for (var turn = 0; turn < 500; turn++)
            {
                sum += new SteadySolver(bank, unit.NewResponse(Mains120)).Solve(120).Amps;
            }
        }) / 500;
        Row("operating point of a 20-lamp bank, mains changed by up to 40 % each time", Micro(warm), "under 20 us");
        Row("the same from scratch, no earlier answer to begin with", Micro(fresh), "under 20 us");
        GC.KeepAlive(sum);
    }

    private static double Stepping(Bank bank, ResistorUnit unit)
    {
        var simulation = new CircuitSimulation(Mains120, bank, unit, 90);
        simulation.Run(0.5);
        var seconds = Best(() =>
        {
            simulation.Reset(90);
            simulation.Run(1);
        });
        Row("1 s of a 20-lamp switch-on at 60 Hz, times real time", string.Create(CultureInfo.InvariantCulture, $"{1 / seconds:0}"), "at least 100");
        simulation.Coast(1);
        var before = GC.GetAllocatedBytesForCurrentThread();
        simulation.Run(1);
        simulation.Coast(1);
        Row("bytes allocated by 6000 steps and 1 s of coasting", string.Create(CultureInfo.InvariantCulture, $"{GC.GetAllocatedBytesForCurrentThread() - before}"), "0");
        return seconds;
    }

    private static void AgainstNgspice(Bank bank, ResistorUnit unit, double ours)
    {
        if (PhysicsChecksCommand.Find("ngspice") is not { } program)
        {
            Row("the same against ngspice", "ngspice is not installed", "at least 30");
            return;
        }

        // ngspice's time to start, read and write is taken off: the same netlist run for a hundredth of the time.
        var step = 1.0 / 6000;
        var whole = Best(() => NgspiceComparison.Run(program, new NetlistWriter(Mains120, 90).Write(bank, unit, 1, step)), 4);
        var start = Best(() => NgspiceComparison.Run(program, new NetlistWriter(Mains120, 90).Write(bank, unit, 0.01, step)), 4);
        Row("the same against ngspice, same step, start-up taken off", string.Create(CultureInfo.InvariantCulture, $"{(whole - start) / (0.99 * ours):0} times as fast"), "at least 30");
    }

    private static void Choosing()
    {
        var shelf = new[] { 25, 40, 60, 75, 100, 150, 200, 300 }.Select(watts => Lamp.FromNameplate(string.Create(CultureInfo.InvariantCulture, $"{watts} W"), watts, 120)).ToArray();
        foreach (var text in new[] { "resistor 100 ohm", "rectifier 45 W 470 uF", "switch-mode 60 W" })
        {
            var unit = Unit.Parse(text, Mains120);
            var considered = 0;
            var seconds = Best(() => considered = BankChooser.Choose(Mains120, unit, shelf).Considered, 4);
            Row($"choose of 8 lamps for {text}, {considered} banks", string.Create(CultureInfo.InvariantCulture, $"{1000 * seconds:0} ms"), "under 1 s");
        }
    }

    private static double Best(Action work, int repetitions = Repetitions)
    {
        work();
        var best = double.MaxValue;
        for (var repetition = 0; repetition < repetitions; repetition++)
        {
            var start = Stopwatch.GetTimestamp();
            work();
            best = Math.Min(best, Stopwatch.GetElapsedTime(start).TotalSeconds);
        }

        return best;
    }

    private static string Micro(double seconds) => string.Create(CultureInfo.InvariantCulture, $"{1e6 * seconds:0.0} us");

    private static void Row(string what, string measured, string wanted) => Console.WriteLine($"| {what} | {measured} | {wanted} |");
}
