using System.Diagnostics;
using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Tests.Netlists;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Prediction;

/// <summary>
/// Our time stepping against ngspice (a general-purpose circuit simulator; Debian package ngspice) on the same circuits: lamp transients within
/// 0.1 % of the RMS current, rectifiers within 1 %. Skipped where ngspice is not installed.
/// </summary>
public sealed class NgspiceTests
{
    [Theory]
    [InlineData("60 W, shorted, worst phase", 120, 60, 90, "60 W", "short", 0.4, 0.001)]
    [InlineData("100 W 230 V, shorted, at a zero", 230, 50, 0, "100 W", "short", 0.3, 0.001)]
    [InlineData("vacuum lamp, 40 degrees", 120, 60, 40, "25 W", "short", 0.4, 0.001)]
    [InlineData("two in series feeding one", 120, 60, 30, "60 W + 40 W", "lamp 100 W", 0.5, 0.001)]
    [InlineData("two beside each other feeding 8 ohm", 230, 50, 70, "60 W || 40 W", "resistor 8 ohm", 0.4, 0.001)]
    [InlineData("a tree feeding a resistor", 120, 60, 120, "(75 W || 25 W) + 150 W", "resistor 50 ohm", 0.5, 0.001)]
    [InlineData("bridge and reservoir behind a lamp", 120, 60, 20, "60 W", "rectifier 45 W 470 uF", 0.8, 0.01)]
    [InlineData("bridge and reservoir behind two lamps", 230, 50, 20, "100 W || 60 W", "rectifier 60 W 220 uF", 0.8, 0.01)]
    [InlineData("one diode behind a lamp", 120, 60, 0, "60 W", "half-wave 60 W 100 uF", 0.6, 0.01)]
    [InlineData("loaded transformer behind a lamp", 230, 50, 0, "100 W", "transformer 60 VA 40 W", 0.6, 0.01)]
    public void Run_SameCircuit_AgreesWithNgspice(
        string what, double volts, double hertz, double phase, string bankText, string unitText, double seconds, double within)
    {
        var program = Outside.Program("ngspice");
        var mains = new Mains(volts, hertz);
        var bank = Bank.Parse(bankText, mains);
        var unit = Unit.Parse(unitText, mains);
        var netlist = new NetlistWriter(mains, phase).Write(bank, unit, seconds);
        var theirs = Ngspice.Run(program, netlist);

        // Root of the mean square difference over the root of the mean square current, on ngspice's own instants.
        var simulation = new CircuitSimulation(mains, bank, unit, phase);
        double difference = 0, total = 0, last = 0, lastAmps = simulation.LineAmps;
        var index = 0;
        while (simulation.Seconds < seconds - 1e-9)
        {
            simulation.Step();
            while (index < theirs.Count && theirs[index].Seconds <= simulation.Seconds)
            {
                var (time, amps) = theirs[index++];
                var ours = lastAmps + (simulation.LineAmps - lastAmps) * (time - last) / (simulation.Seconds - last);

                // The first half millisecond is left out: a switch that closes at the peak is a jump for one, a ramp for the other.
                if (time > 0.0005)
                {
                    difference += (ours - amps) * (ours - amps);
                    total += amps * amps;
                }
            }

            (last, lastAmps) = (simulation.Seconds, simulation.LineAmps);
        }

        Assert.True(index > 1000, $"ngspice gave {index} instants");
        var share = Math.Sqrt(difference / total);
        TestContext.Current.TestOutputHelper?.WriteLine($"{what}: {100 * share:0.0000} %");
        Assert.True(share < within, $"{what}: {100 * share:0.000} % RMS");
    }
}

/// <summary>Runs the simulator and reads what it wrote.</summary>
internal static class Ngspice
{
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
            Assert.True(File.Exists(result), $"ngspice wrote no result:\n{output}\n{error.Result}");
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
