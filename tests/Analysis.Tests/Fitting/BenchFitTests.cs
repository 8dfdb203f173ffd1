using Lampwarden.Analysis.Fitting;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Fitting;

public sealed class BenchFitTests
{
    private const double Window = 0.1;
    private const double Noise = 0.001;

    private static readonly Mains Mains120 = new(120, 60);

    [Fact]
    public void Fit_ResistorAndLamps_FindsBothWithinTheirErrors()
    {
        var bank = Bank.Parse("60 W", Mains120);
        var truth = bank.With([.. bank.Lamps.Select(lamp => lamp.With(lamp.Filament! with { Watts = 57.6, CoilFactor = 0.65 * 1.1 }))]);
        var readings = Record(truth, new ResistorUnit("truth", 200), 12);
        var fit = BenchFit.Fit(
            Mains120, bank, new ResistorUnit("unit", 240), FitTargets.UnitRating | FitTargets.CoilFactor, readings, Window);
        Assert.Equal(FitEnd.Converged, fit.Result.End);

        // The lamp's watts were not to be found: the rating takes up their part, here to 5 %.
        Assert.Equal(240.0 / 200, fit.Factors[0].Factor, 0.06);

        var both = BenchFit.Fit(
            Mains120, bank, new ResistorUnit("unit", 240), FitTargets.UnitRating | FitTargets.LampWatts | FitTargets.CoilFactor, readings, Window);
        Near(both.Factors[0], 240.0 / 200);
        Near(both.Factors[1], 0.96);
        Near(both.Factors[2], 1.1);
    }

    [Fact]
    public void Fit_RectifierWattsAndCapacitance_FindsBothWithinTheirErrors()
    {
        var bank = Bank.Parse("100 W", Mains120);
        var unit = Unit.Parse("rectifier 45 W 470 uF", Mains120);
        var readings = Record(bank, new RectifierUnit("truth", 40, 330e-6, 0.5, true, Mains120), 8);
        var fit = BenchFit.Fit(Mains120, bank, unit, FitTargets.UnitRating | FitTargets.Capacitance, readings, Window);
        Assert.Equal(FitEnd.Converged, fit.Result.End);
        Near(fit.Factors[0], 40.0 / 45);
        Near(fit.Factors[1], 330.0 / 470);
    }

    [Fact]
    public void Fit_CapacitanceOfAResistor_Throws() => Assert.Throws<ArgumentException>(() => BenchFit.Fit(
        Mains120, Bank.Parse("60 W", Mains120), new ResistorUnit("unit", 240), FitTargets.Capacitance, new SwitchOnReading[9], Window));

    [Fact]
    public void Fit_TooFewReadings_Throws() => Assert.Throws<ArgumentException>(() => BenchFit.Fit(
        Mains120, Bank.Parse("60 W", Mains120), new ResistorUnit("unit", 240), FitTargets.UnitRating, new SwitchOnReading[2], Window));

    // Within four of its own standard errors and half a percent for the phase of switching, which the fit does not know.
    private static void Near(FittedFactor found, double truth) =>
        Assert.True(Math.Abs(found.Factor / truth - 1) < 4 * found.StandardError + 0.005, $"{found.Target}: {found.Factor} for {truth}, error {found.StandardError}");

    // Windows one after the other from switch-on at another phase than the fit supposes, with noise.
    private static SwitchOnReading[] Record(Bank bank, Unit unit, int count)
    {
        var simulation = new CircuitSimulation(Mains120, bank, unit, phaseDegrees: 110);
        var random = new Random(3);
        return [.. Enumerable.Range(1, count).Select(index =>
        {
            var amps = simulation.Run(Window);
            return new SwitchOnReading(index * Window, amps * (1 + Noise * (2 * random.NextDouble() - 1)));
        })];
    }
}
