using System.Collections.Concurrent;
using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Benchmarks.Detection;

/// <summary>
/// A bench of real lamps and a real unit for the second corpus: the line current comes from filament physics, faults are changes of the
/// unit's load or of a lamp. Quasi-steady: solved on a grid of mains and load, and read off it between.
/// The bank's lamps differ from their nameplates by 4 % (1 sd); the expectation handed to the watch knows the nameplates only.
/// </summary>
public sealed class PhysicalBench
{
    private const double Volts = CorpusOptions.NominalVolts;
    private const int VoltSteps = 11, LoadSteps = 61;
    private const double FirstVolt = -0.16, VoltStep = 0.02, FirstLoad = -0.6, LoadStep = 0.1;
    private const double DeadShort = 4;

    private static readonly (string Name, double Watts)[][] Banks =
    [
        [("north", 60), ("east", 40)],
        [("north", 100), ("east", 60)],
        [("north", 150), ("east", 75), ("south", 25)],
        [("north", 100), ("east", 60), ("south", 40)],
        [("north", 75), ("east", 75), ("south", 150), ("west", 40)],
    ];

    private readonly double[][] logs; // by lamp dark (0: none), then grid

    private PhysicalBench(Bank bank, string unit, double[][] logs, Expectation expectation) =>
        (Bank, UnitText, this.logs, Expectation) = (bank, unit, logs, expectation);

    public Bank Bank { get; }

    public string UnitText { get; }

    public Expectation Expectation { get; }

    private static readonly ConcurrentDictionary<(int Corpus, int Run), PhysicalBench> Known = new();

    /// <summary>The bench of a run; solving its grid takes a second, so it is kept for the next fault.</summary>
    public static PhysicalBench Of(CorpusOptions options, int run)
    {
        ArgumentNullException.ThrowIfNull(options);
        return Known.GetOrAdd((options.Corpus, run), _ => Draw(options, run));
    }

    private static PhysicalBench Draw(CorpusOptions options, int run)
    {
        var random = Xoshiro256.For(options.Corpus, run, 20);
        var mains = new Mains(Volts, 60);
        var lamps = Banks[(int)(random.Unit() * Banks.Length)];
        var inventory = new LampInventory(lamps.Select(lamp => Lamp.FromNameplate(lamp.Name, lamp.Watts, Volts)));
        var bank = Bank.Parse(string.Join(" || ", lamps.Select(lamp => lamp.Name)), mains, inventory);
        var scale = lamps.Select(_ => 1 + (0.04 * random.Normal())).ToArray();
        var shorted = new BankSolver(bank).Feed(Volts, 1e-6);
        var kind = random.Unit() switch { < 0.4 => 'r', < 0.65 => 'h', < 0.85 => 'c', _ => 's' };
        var share = kind == 's' ? random.Uniform(0.12, 0.22) : random.Uniform(0.3, 0.65);
        var left = Volts - new BankSolver(bank).Carry(shorted * share);
        var nameplate = UnitOf(kind, shorted * share, left, 0, mains);
        var logs = Enumerable.Range(0, lamps.Length + 1).Select(dark => Grid(bank, scale, dark - 1, kind, shorted * share, left, mains)).ToArray();
        var steady = Solve(bank, null, -1, nameplate, Volts, mains);
        var expectation = new Expectation
        {
            SteadyAmps = steady,
            BandLowAmps = steady * 0.85,
            BandHighAmps = steady * 1.35, // warm-up of up to a quarter lies within
            ShortedAmps = shorted,
            SettleSeconds = 0.3,
            MainsExponent = Math.Log(Solve(bank, null, -1, nameplate, Volts * 1.01, mains) / Solve(bank, null, -1, nameplate, Volts * 0.99, mains)) / Math.Log(1.01 / 0.99),
            Lamps = [.. lamps.Select((lamp, index) => new ExpectedLamp(lamp.Name, Solve(bank, null, index, nameplate, Volts, mains)))],
        };
        return new PhysicalBench(bank, nameplate.Text, logs, expectation);
    }

    /// <summary>Line current for ln(V/Vnom), ln of the load's scale, and the lamp that is dark (-1: none).</summary>
    public double Amps(double logVolts, double logLoad, int dark)
    {
        if (logLoad > DeadShort)
        {
            return Expectation.ShortedAmps * Math.Exp(0.54 * logVolts); // nothing but the bank left, lamps near their rating
        }

        var grid = logs[dark + 1];
        var v = Math.Clamp((logVolts - FirstVolt) / VoltStep, 0, VoltSteps - 1.001);
        var u = Math.Clamp((logLoad - FirstLoad) / LoadStep, 0, LoadSteps - 1.001);
        var (i, j) = ((int)v, (int)u);
        var (a, b) = (v - i, u - j);
        double At(int row, int column) => grid[(row * LoadSteps) + column];
        return Math.Exp(((1 - a) * (((1 - b) * At(i, j)) + (b * At(i, j + 1)))) + (a * (((1 - b) * At(i + 1, j)) + (b * At(i + 1, j + 1)))));
    }

    private static double[] Grid(Bank bank, double[] scale, int dark, char kind, double amps, double left, Mains mains)
    {
        var grid = new double[VoltSteps * LoadSteps];
        for (var j = 0; j < LoadSteps; j++)
        {
            var unit = UnitOf(kind, amps, left, FirstLoad + (j * LoadStep), mains);
            for (var i = 0; i < VoltSteps; i++)
            {
                var found = Solve(bank, scale, dark, unit, Volts * Math.Exp(FirstVolt + (i * VoltStep)), mains);

                // A constant-power unit beyond what the bank carries: it stays where it last ran.
                grid[(i * LoadSteps) + j] = !double.IsNaN(found) ? Math.Log(found) : j > 0 ? grid[(i * LoadSteps) + j - 1] : Math.Log(0.02 * amps);
            }
        }

        return grid;
    }

    private static double Solve(Bank bank, double[]? scale, int dark, Unit unit, double volts, Mains mains)
    {
        var solver = new SteadySolver(bank, unit.NewResponse(mains));
        for (var lamp = 0; lamp < bank.Lamps.Count; lamp++)
        {
            solver.Bank.CurrentScale[lamp] = scale?[lamp] ?? 1;
            solver.Bank.IsOut[lamp] = lamp == dark;
        }

        return solver.TrySolve(volts, out var point) ? point.Amps : double.NaN;
    }

    private static Unit UnitOf(char kind, double amps, double volts, double logLoad, Mains mains)
    {
        var watts = Math.Clamp(0.8 * amps * volts * Math.Exp(logLoad), 1, 4500).ToString("0.######", CultureInfo.InvariantCulture);
        var ohms = (volts / amps * Math.Exp(-logLoad)).ToString("0.######", CultureInfo.InvariantCulture);
        return Unit.Parse(kind switch
        {
            'r' => $"resistor {ohms} ohm",
            'h' => $"heater {watts} W",
            'c' => $"rectifier {watts} W 220 uF",
            _ => $"switch-mode {watts} W",
        }, mains);
    }
}
