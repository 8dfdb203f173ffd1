using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Prediction;

/// <summary>
/// Truth drawn from the stated tolerances must fall inside the 95 % intervals 93 to 97 % of the time (2,000 draws, whose own scatter is
/// half a percent). The truth is solved exactly; the intervals come from propagation around the nominal bench.
/// </summary>
public sealed class CoverageTests
{
    private const int Draws = 2000;

    private static readonly Mains Mains120 = new(120, 60);
    private static readonly Mains Mains230 = new(230, 50);

    [Theory]
    [InlineData(120, "60 W", "resistor 240 ohm")]
    [InlineData(120, "60 W", "resistor 20 ohm")]
    [InlineData(120, "100 W", "resistor 2000 ohm")]
    [InlineData(120, "60 W || 40 W", "lamp 100 W")]
    [InlineData(230, "60 W + 100 W", "lamp 60 W")]
    [InlineData(230, "(75 W || 25 W) + 150 W", "heater 800 W")]
    [InlineData(120, "25 W", "short")]
    [InlineData(120, "100 W", "transformer 60 VA")]
    [InlineData(120, "60 W || 60 W", "transformer 60 VA 40 W")]
    [InlineData(120, "60 W || 60 W", "rectifier 45 W 470 uF")]
    [InlineData(230, "100 W", "half-wave 60 W")]
    [InlineData(120, "200 W || 100 W", "motor 60 W")]
    public void Predict_TruthDrawnFromTheTolerances_FallsInsideAsOftenAsClaimed(double volts, string bankText, string unitText)
    {
        var mains = volts == 120 ? Mains120 : Mains230;
        var bank = Bank.Parse(bankText, mains);
        var unit = Unit.Parse(unitText, mains);
        var settings = new PredictionSettings();
        var inputs = new BenchInputs(mains, bank, unit, settings);
        var joined = new BenchInputs(mains, bank, unit, settings, joinEqualLamps: true);
        var intervals = new Dictionary<string, Interval>();
        var healthy = new BenchState(mains, bank, unit, settings, inputs, joined);
        var shorted = new BenchState(mains, bank, ResistorUnit.Short, settings, inputs, joined);
        var spread = new BenchIntervals(inputs, joined, settings);
        spread.FillSteady(healthy, shorted, 1, intervals);
        spread.FillPeak(shorted, intervals);
        var random = new Random(20240611);
        var inside = new Dictionary<string, int>();
        for (var draw = 0; draw < Draws; draw++)
        {
            var values = inputs.Inputs.Select(input => input.Draw(random.NextDouble())).ToArray();
            foreach (var (name, value) in Truth(mains, inputs, values))
            {
                if (intervals[name] is { } interval && interval.High > interval.Low)
                {
                    inside[name] = inside.GetValueOrDefault(name) + (interval.Contains(value) ? 1 : 0);
                }
            }
        }

        Assert.True(inside.Count >= 4);
        var wrong = inside.Where(pair => pair.Value is < (int)(0.93 * Draws) or > (int)(0.97 * Draws))
            .Select(pair => $"{pair.Key} {100.0 * pair.Value / Draws:0.0} %");
        Assert.True(!wrong.Any(), string.Join(", ", wrong));
    }

    private static IEnumerable<(string Name, double Value)> Truth(Mains mains, BenchInputs inputs, double[] values)
    {
        var bank = inputs.BankOf(values);
        var volts = inputs.MainsVolts(values);
        var healthy = new SteadySolver(bank, inputs.UnitOf(values).NewResponse(mains));
        healthy.TrySolve(volts, out var point);
        yield return ("steady.lineAmps", point.Amps);
        yield return ("steady.bankVolts", healthy.Bank.BankVolts);
        yield return ("steady.unitVolts", point.Volts);
        yield return ("steady.unitWatts", point.Watts);
        yield return ("steady.lamps[0].watts", healthy.Bank.LampVolts[0] * healthy.Bank.LampAmps[0]);
        yield return ("steady.lamps[0].filamentKelvin", healthy.Bank.Kelvin(0));
        var shorted = new BankSolver(bank).Feed(volts, 0);
        yield return ("shorted.lineAmps", shorted);
        yield return ("contrast", shorted / point.Amps);
        var cold = inputs.RoomKelvin(values);
        yield return ("bank.coldOhms", Cold(bank.Root, cold));
        yield return ("shorted.peakAmps", Math.Sqrt(2) * volts / Cold(bank.Root, cold));
    }

    private static double Cold(BankPart part, double kelvin) => part switch
    {
        LampPart leaf => leaf.Lamp.Filament!.Ohms(kelvin),
        SeriesPart series => series.Parts.Sum(inner => Cold(inner, kelvin)),
        ParallelPart parallel => 1 / parallel.Parts.Sum(inner => 1 / Cold(inner, kelvin)),
        _ => double.NaN,
    };
}
