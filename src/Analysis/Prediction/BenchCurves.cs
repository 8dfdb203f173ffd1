using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>A named line of points: volts and amperes RMS.</summary>
public sealed record BenchCurve(string Name, IReadOnlyList<(double Volts, double Amps)> Points);

/// <summary>
/// The curves of a bench for a picture: current against volts of each lamp, of the bank, and of a plain resistor that would draw what the
/// shorted bank draws; and the unit's current against the volts that the bank then has to take. Where bank and unit cross is where the
/// bench runs: the bank's volts are the same for both, so this holds for any unit, in phase or not.
/// </summary>
public sealed class BenchCurves
{
    private const int Points = 120;

    /// <summary>Works the curves out up to the mains voltage.</summary>
    public BenchCurves(Mains mains, Bank bank, Unit unit)
    {
        var solver = new BankSolver(bank);
        var volts = Enumerable.Range(0, Points + 1).Select(point => mains.Volts * point / Points).ToArray();
        Lamps = [.. bank.Lamps.DistinctBy(lamp => (lamp.Filament, lamp.ColdOhms)).Select(lamp => new BenchCurve(
            lamp.Name, [.. volts.Select(at => (at, lamp.Filament is null ? at / lamp.ColdOhms : lamp.Curve.Amps(at, out _)))]))];
        Bank = new BenchCurve(bank.Text, [.. volts.Select(at => (at, solver.Feed(at, 0)))]);
        ShortedAmps = solver.Feed(mains.Volts, 0);
        PlainResistor = new BenchCurve("plain resistor", [(0, 0), (mains.Volts, ShortedAmps)]);
        Unit = new BenchCurve(unit.Text, UnitPoints(mains, unit, 0.02 * mains.Volts / ShortedAmps, 300 * mains.Volts / ShortedAmps));
    }

    /// <summary>One curve for each different lamp.</summary>
    public IReadOnlyList<BenchCurve> Lamps { get; }

    /// <summary>The whole bank.</summary>
    public BenchCurve Bank { get; }

    /// <summary>A straight line to the same shorted current: what a resistor in the bank's place would do.</summary>
    public BenchCurve PlainResistor { get; }

    /// <summary>The unit: its current against the volts left for the bank.</summary>
    public BenchCurve Unit { get; }

    /// <summary>Current with the output shorted.</summary>
    public double ShortedAmps { get; }

    private static List<(double Volts, double Amps)> UnitPoints(Mains mains, Unit unit, double leastOhms, double mostOhms)
    {
        var response = unit.NewResponse(mains);
        var points = new List<(double, double)>();
        for (var point = 0; point <= Points; point++)
        {
            var ohms = leastOhms * Math.Pow(mostOhms / leastOhms, point / (double)Points);
            var at = response.At(mains.Volts, ohms);

            // A supply that has dropped out draws nothing that a line could show.
            if (unit is SwitchModeUnit supply && at.Watts < 0.98 * supply.ConverterWatts)
            {
                break;
            }

            points.Add((at.Amps * ohms, at.Amps));
        }

        return points;
    }
}
