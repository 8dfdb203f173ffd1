using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>Says beforehand what a bench will do, with an interval on every number.</summary>
public static class Predictor
{
    /// <summary>Works out the steady state, the switch-on, the shorted state and the band of one bank and one unit.</summary>
    /// <param name="mains">The supply.</param>
    /// <param name="bank">The limiter.</param>
    /// <param name="unit">What stands behind it.</param>
    /// <param name="settings">Meter and uncertainties; null takes the defaults.</param>
    public static BenchPrediction Predict(Mains mains, Bank bank, Unit unit, PredictionSettings? settings = null) =>
        Predict(mains, bank, unit, settings, out _, out _);

    /// <summary>The same, with the two simulated switch-ons for a picture.</summary>
    public static BenchPrediction Predict(
        Mains mains, Bank bank, Unit unit, PredictionSettings? settings, out SwitchOn healthyRun, out SwitchOn shortedRun)
    {
        settings ??= new PredictionSettings();
        var inputs = new BenchInputs(mains, bank, unit, settings);
        var joined = new BenchInputs(mains, bank, unit, settings, joinEqualLamps: true);
        var healthy = new BenchState(mains, bank, unit, settings, inputs, joined);
        var shorted = new BenchState(mains, bank, ResistorUnit.Short, settings, inputs, joined);
        (healthyRun, shortedRun) = (healthy.Transient, shorted.Transient);

        var intervals = new SortedDictionary<string, Interval>(StringComparer.Ordinal);
        var band = new CurrentBand(double.NaN, double.NaN, CoverageFactor.Coverage);
        var shown = healthy.Exists ? MeterView.SettledShare(healthy.Point, settings.Meter) : double.NaN;
        if (healthy.Exists)
        {
            var spread = new BenchIntervals(inputs, joined, settings).Fill(healthy, shorted, shown, settings.WithIntervals ? intervals : null);
            band = new CurrentBand(Math.Max(0, spread.Low), spread.High, CoverageFactor.Coverage);
        }
        else if (settings.WithIntervals)
        {
            new BenchIntervals(inputs, joined, settings).FillShorted(shorted, intervals);
        }

        var notes = Notes(mains, bank, healthy, shorted, settings);
        var numbers = healthy.TransientNumbers;
        var inrush = new Inrush(
            numbers[TransientEvaluator.Peak],
            numbers[TransientEvaluator.FirstCycle],
            healthy.Exists ? numbers[TransientEvaluator.Settle] : double.NaN,
            settings.Meter.Display(numbers[TransientEvaluator.FirstReading]));
        var point = healthy.Point;
        var bankVolts = healthy.Exists ? healthy.Steady[SteadyEvaluator.BankVolts] : double.NaN;
        return new BenchPrediction(
            mains,
            new BankSummary(bank.Text, bank.ColdOhms, bank.RatedWatts),
            new UnitSummary(unit.Text),
            new SteadyState(
                healthy.Exists, point.Amps, bankVolts, point.Volts, point.Watts, point.PowerFactor, healthy.Lamps(), notes.Count == 0 ? null : string.Join(" ", notes)),
            inrush,
            new ShortedState(shorted.Point.Amps, shorted.TransientNumbers[TransientEvaluator.Peak], shorted.Lamps()),
            band,
            shorted.Point.Amps / point.Amps,
            notes,
            intervals);
    }

    private static List<string> Notes(Mains mains, Bank bank, BenchState healthy, BenchState shorted, PredictionSettings settings)
    {
        var notes = new List<string>();
        if (healthy.Note is not null)
        {
            notes.Add(healthy.Note);
        }

        if (healthy.Exists && healthy.Point.Amps > 0)
        {
            // The resistor that would show the same reading is what the reading would be taken for.
            var shown = MeterView.SettledShare(healthy.Point, settings.Meter) * healthy.Point.Amps;
            var solver = new BankSolver(bank);
            var likeVolts = mains.Volts - solver.Carry(Math.Min(shown, shorted.Point.Amps));
            var misled = PredictionNotes.MeterMisled(healthy.Point, settings.Meter, likeVolts * shown);
            if (misled is not null)
            {
                notes.Add(misled);
            }
        }

        notes.AddRange(bank.Notes);
        return notes;
    }
}
