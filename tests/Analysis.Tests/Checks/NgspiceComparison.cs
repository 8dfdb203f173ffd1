using System.Diagnostics;
using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Tests.Netlists;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Checks;

/// <summary>One circuit for both simulators.</summary>
public sealed record ComparedCircuit(
    string What, double Volts, double Hertz, double PhaseDegrees, string Bank, string Unit, double Seconds, double Within);

/// <summary>Our time stepping against ngspice, a general-purpose circuit simulator (Debian package ngspice), on the same circuits.</summary>
public static class NgspiceComparison
{
    // A switch that closes at the peak is a jump for one and a ramp for the other.
    private const double SkippedSeconds = 0.0005;

    /// <summary>Lamps within 0.1 % of the RMS current, the rest within 1 %.</summary>
    public static IReadOnlyList<ComparedCircuit> Circuits { get; } =
    [
        new("60 W, shorted, worst phase", 120, 60, 90, "60 W", "short", 0.4, 0.001),
        new("100 W, shorted, at a zero", 230, 50, 0, "100 W", "short", 0.3, 0.001),
        new("vacuum lamp, 40 degrees", 120, 60, 40, "25 W", "short", 0.4, 0.001),
        new("two in series feeding one", 120, 60, 30, "60 W + 40 W", "lamp 100 W", 0.4, 0.001),
        new("two beside each other feeding 8 ohm", 230, 50, 70, "60 W || 40 W", "resistor 8 ohm", 0.4, 0.001),
        new("a tree feeding a resistor", 120, 60, 120, "(75 W || 25 W) + 150 W", "resistor 50 ohm", 0.4, 0.001),
        new("bridge and reservoir behind a lamp", 120, 60, 20, "60 W", "rectifier 45 W 470 uF", 0.5, 0.01),
        new("bridge and reservoir behind two lamps", 230, 50, 20, "100 W || 60 W", "rectifier 60 W 220 uF", 0.5, 0.01),
        new("one diode and reservoir behind a lamp", 120, 60, 0, "60 W", "half-wave 60 W 100 uF", 0.4, 0.01),
        new("loaded transformer behind a lamp", 230, 50, 0, "100 W", "transformer 60 VA 40 W", 0.4, 0.01),
    ];

    /// <summary>Root of the mean square difference of the current over the root of its mean square, on ngspice's own instants.</summary>
    public static double Difference(string program, ComparedCircuit circuit)
    {
        var mains = new Mains(circuit.Volts, circuit.Hertz);
        var bank = Bank.Parse(circuit.Bank, mains);
        var unit = Unit.Parse(circuit.Unit, mains);
        var theirs = Run(program, new NetlistWriter(mains, circuit.PhaseDegrees).Write(bank, unit, circuit.Seconds));
        var simulation = new CircuitSimulation(mains, bank, unit, circuit.PhaseDegrees);
        double difference = 0, total = 0, last = 0, lastAmps = simulation.LineAmps;
        var index = 0;
        while (simulation.Seconds < circuit.Seconds - 1e-9)
        {
            simulation.Step();
            for (; index < theirs.Count && theirs[index].Seconds <= simulation.Seconds; index++)
            {
                var (time, amps) = theirs[index];
                var ours = lastAmps + (simulation.LineAmps - lastAmps) * (time - last) / (simulation.Seconds - last);
                if (time > SkippedSeconds)
                {
                    difference += (ours - amps) * (ours - amps);
                    total += amps * amps;
                }
            }

            (last, lastAmps) = (simulation.Seconds, simulation.LineAmps);
        }

        return index > 1000 ? Math.Sqrt(difference / total) : throw new InvalidOperationException($"ngspice gave only {index} instants of '{circuit.What}'.");
    }

    /// <summary>Runs a netlist and reads the current it wrote.</summary>
    public static List<(double Seconds, double Amps)> Run(string program, string netlist)
    {
        var folder = Directory.CreateTempSubdirectory("lampwarden-ngspice-");
        try
        {
            var file = Path.Combine(folder.FullName, "circuit.cir");
            File.WriteAllText(file, netlist);
            using var process = Process.Start(new ProcessStartInfo(program, ["-b", file])
            {
                WorkingDirectory = folder.FullName,
                RedirectStandardOutput = true,
                RedirectStandardError = true,
            })!;
            var error = process.StandardError.ReadToEndAsync();
            var output = process.StandardOutput.ReadToEnd();
            process.WaitForExit();
            var result = Path.Combine(folder.FullName, "current.txt");
            if (!File.Exists(result))
            {
                throw new InvalidOperationException($"ngspice wrote no result: {error.Result}\n{output}");
            }

            return [.. File.ReadLines(result)
                .Select(line => line.Split(' ', StringSplitOptions.RemoveEmptyEntries))
                .Select(cells => (Number(cells[0]), Number(cells[1])))];
        }
        finally
        {
            folder.Delete(true);
        }
    }

    private static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
}
