using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Tungsten;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>Says beforehand what a bench will do.</summary>
public static class Predictor
{
    private const double LongestSeconds = 20;

    // Standard normal quantile for 95 % coverage.
    private const double CoverageFactor = 1.96;

    /// <summary>Works out the steady state, the switch-on, the shorted state and the band of one bank and one unit.</summary>
    public static BenchPrediction Predict(Mains mains, Bank bank, Unit unit, PredictionSettings? settings = null)
    {
        settings ??= new PredictionSettings();
        var healthy = Work(mains, bank, unit, settings, out var steady);
        var shorted = Work(mains, bank, ResistorUnit.Short, settings, out var shortedPoint);
        var note = bank.Notes.Count == 0 ? null : string.Join(" ", bank.Notes);
        var inrush = new Inrush(
            healthy.Transient.PeakAmps,
            healthy.Transient.RmsAmps(0, 1 / mains.Hertz),
            healthy.Transient.SettleSeconds(steady.Amps),
            healthy.Transient.RmsAmps(0, settings.MeterWindowSeconds));
        return new BenchPrediction(
            mains,
            new BankSummary(bank.Text, bank.ColdOhms, bank.RatedWatts),
            new UnitSummary(unit.Text),
            new SteadyState(true, steady.Amps, healthy.BankVolts, steady.Volts, steady.Watts, steady.PowerFactor, healthy.Lamps, note),
            inrush,
            new ShortedState(shortedPoint.Amps, shorted.Transient.PeakAmps, shorted.Lamps),
            Band(mains, bank, unit, settings, steady.Amps),
            shortedPoint.Amps / steady.Amps,
            bank.Notes);
    }

    private static Worked Work(Mains mains, Bank bank, Unit unit, PredictionSettings settings, out UnitPoint steady)
    {
        var solver = new SteadySolver(bank, unit.NewResponse(mains), settings.SourceOhms);
        steady = solver.Solve(mains.Volts);
        var willGlow = new bool[bank.Lamps.Count];
        for (var lamp = 0; lamp < willGlow.Length; lamp++)
        {
            willGlow[lamp] = solver.Bank.Kelvin(lamp) > TungstenProperties.FirstGlowKelvin;
        }

        var (phase, _) = SwitchOn.WorstPhase(mains, bank, unit, settings.SourceOhms);
        var simulation = new CircuitSimulation(mains, bank, unit, phase, sourceOhms: settings.SourceOhms);
        var transient = SwitchOn.Run(simulation, steady.Amps, willGlow, 2.5 * settings.MeterWindowSeconds, LongestSeconds);
        var lamps = bank.Lamps.Select((lamp, index) => new LampState(
            lamp.Name,
            solver.Bank.LampVolts[index],
            solver.Bank.LampAmps[index],
            solver.Bank.LampVolts[index] * solver.Bank.LampAmps[index],
            solver.Bank.Kelvin(index),
            lamp.Glow(solver.Bank.Kelvin(index)),
            transient.FirstGlowSeconds[index])).ToArray();
        return new Worked(transient, solver.Bank.BankVolts, lamps);
    }

    // A first simple rule: mains, lamps and unit each moved by their one sigma, joined as a root of squares.
    private static CurrentBand Band(Mains mains, Bank bank, Unit unit, PredictionSettings settings, double steadyAmps)
    {
        var solver = new SteadySolver(bank, unit.NewResponse(mains), settings.SourceOhms);
        var byMains = solver.Solve(mains.Volts * (1 + settings.MainsUncertainty)).Amps - steadyAmps;
        Array.Fill(solver.Bank.CurrentScale, 1 + settings.LampWattsUncertainty);
        var byLamps = solver.Solve(mains.Volts).Amps - steadyAmps;
        var byUnit = steadyAmps * settings.UnitUncertainty;
        var width = CoverageFactor * Math.Sqrt(byMains * byMains + byLamps * byLamps + byUnit * byUnit);
        return new CurrentBand(Math.Max(0, steadyAmps - width), steadyAmps + width, 0.95);
    }

    private sealed record Worked(SwitchOn Transient, double BankVolts, IReadOnlyList<LampState> Lamps);
}
