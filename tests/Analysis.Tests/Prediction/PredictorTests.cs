using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Prediction;

public sealed class PredictorTests
{
    private static readonly Mains Mains120 = new(120, 60);

    [Fact]
    public void Predict_EveryNumber_HasAnIntervalAroundIt()
    {
        var it = Predict("60 W + 100 W", "resistor 100 ohm");
        var numbers = new Dictionary<string, double>
        {
            ["bank.coldOhms"] = it.Bank.ColdOhms,
            ["steady.lineAmps"] = it.Steady.LineAmps,
            ["steady.bankVolts"] = it.Steady.BankVolts,
            ["steady.unitVolts"] = it.Steady.UnitVolts,
            ["steady.unitWatts"] = it.Steady.UnitWatts,
            ["steady.powerFactor"] = it.Steady.PowerFactor,
            ["inrush.peakAmps"] = it.Inrush.PeakAmps,
            ["inrush.firstCycleRmsAmps"] = it.Inrush.FirstCycleRmsAmps,
            ["inrush.settleSeconds"] = it.Inrush.SettleSeconds,
            ["inrush.firstReadingAmps"] = it.Inrush.FirstReadingAmps,
            ["shorted.lineAmps"] = it.Shorted.LineAmps,
            ["shorted.peakAmps"] = it.Shorted.PeakAmps,
            ["contrast"] = it.Contrast,
        };
        for (var lamp = 0; lamp < it.Steady.Lamps.Count; lamp++)
        {
            foreach (var (part, state) in new[] { ("steady", it.Steady.Lamps[lamp]), ("shorted", it.Shorted.Lamps[lamp]) })
            {
                numbers[$"{part}.lamps[{lamp}].volts"] = state.Volts;
                numbers[$"{part}.lamps[{lamp}].amps"] = state.Amps;
                numbers[$"{part}.lamps[{lamp}].watts"] = state.Watts;
                numbers[$"{part}.lamps[{lamp}].filamentKelvin"] = state.FilamentKelvin;
                numbers[$"{part}.lamps[{lamp}].glow"] = state.Glow;
            }

            numbers[$"steady.lamps[{lamp}].firstGlowSeconds"] = it.Steady.Lamps[lamp].FirstGlowSeconds;
        }

        Assert.All(numbers, pair => Assert.True(
            it.Intervals.TryGetValue(pair.Key, out var interval) && interval.Low <= pair.Value * (1 + 1e-6) && interval.High >= pair.Value * (1 - 1e-6),
            $"{pair.Key}: {pair.Value} in {it.Intervals.GetValueOrDefault(pair.Key)}"));
    }

    // First-order propagation against a Monte Carlo of the whole simulation (JCGM 101): the switch-on numbers, which are the dear ones.
    [Fact]
    public void Predict_SwitchOnIntervals_AgreeWithMonteCarlo()
    {
        var bank = Bank.Parse("60 W", Mains120);
        var unit = Unit.Parse("resistor 50 ohm", Mains120);
        var settings = new PredictionSettings { Meter = new PredictedMeter { Counts = 0, PercentOfReading = 0, CountSize = 0 } };
        var prediction = Predictor.Predict(Mains120, bank, unit, settings);
        var inputs = new BenchInputs(Mains120, bank, unit, settings);
        var evaluator = new TransientEvaluator(Mains120, inputs, settings, 90, 3, [true], unit);
        var random = new Random(11);
        var draws = Enumerable.Range(0, 400).Select(_ =>
        {
            var values = inputs.Inputs.Select(input => input.Draw(random.NextDouble())).ToArray();
            var steady = new BankSolver(inputs.BankOf(values)).Feed(inputs.MainsVolts(values), 50 / BenchInputs.UnitFactor(values));
            return evaluator.Numbers(evaluator.Run(values, steady), steady);
        }).ToArray();
        foreach (var (name, number) in new[]
        {
            ("inrush.peakAmps", TransientEvaluator.Peak),
            ("inrush.firstCycleRmsAmps", TransientEvaluator.FirstCycle),
            ("inrush.settleSeconds", TransientEvaluator.Settle),
            ("steady.lamps[0].firstGlowSeconds", TransientEvaluator.FirstLamp),
        })
        {
            // 400 draws scatter by 1.1 % about 95 %.
            var inside = draws.Count(draw => prediction.Intervals[name].Contains(draw[number])) / 400.0;
            Assert.True(inside is >= 0.91 and <= 0.985, $"{name}: {100 * inside:0.0} %");
        }
    }

    [Fact]
    public void Predict_FirstReading_FollowsTheWindow()
    {
        // A short window sees more of the switch-on; a long one nearly the steady value.
        var readings = new[] { 0.1, 0.2, 0.5, 2 }.Select(window => Predict("60 W", "short", window).Inrush.FirstReadingAmps).ToArray();
        Assert.Equal(readings.OrderDescending(), readings);
        Assert.InRange(readings[0], 0.85, 1.1);
        Assert.InRange(readings[3], 0.5, 0.56);
    }

    [Fact]
    public void First_WindowOfAnyAlignment_LiesBetweenTheStatedEnds()
    {
        var bank = Bank.Parse("60 W", Mains120);
        Predictor.Predict(Mains120, bank, ResistorUnit.Short, new PredictionSettings { WithIntervals = false }, out var run, out _);
        var meter = new PredictedMeter { CountSize = 0 };
        var (aligned, least) = MeterView.First(run, meter);
        for (var delay = 0.01; delay < 0.2; delay += 0.013)
        {
            var first = MeterView.Readings(run.Amps, run.StepSeconds, meter, delay).Take(2).Max(reading => reading.Amps);
            Assert.InRange(first, 0.97 * least, aligned * 1.001);
        }
    }

    [Fact]
    public void Readings_FirstOrderConverter_RisesPastAndSettles()
    {
        var bank = Bank.Parse("60 W", Mains120);
        Predictor.Predict(Mains120, bank, ResistorUnit.Short, new PredictionSettings { WithIntervals = false, MeterWindowSeconds = 0.4 }, out var run, out _);
        var shown = run.Readings(new PredictedMeter { Response = MeterResponse.FirstOrder, WindowSeconds = 0.05, CountSize = 0 });
        Assert.InRange(shown.Max(reading => reading.Amps) / 0.5, 1.6, 2.2);
        Assert.Equal(0.5, shown[^1].Amps, 0.02);
    }

    [Fact]
    public void Readings_BeyondTheRange_ShowOverload()
    {
        var bank = Bank.Parse("60 W", Mains120);
        Predictor.Predict(Mains120, bank, ResistorUnit.Short, new PredictionSettings { WithIntervals = false }, out var run, out _);
        Assert.Equal(double.PositiveInfinity, run.Readings(new PredictedMeter { RangeAmps = 0.6 })[0].Amps);
    }

    [Fact]
    public void SwitchOn_WarmFilament_PeaksLower()
    {
        var bank = Bank.Parse("60 W", Mains120);
        var lamp = bank.Lamps[0];
        var warm = lamp.CooledKelvin(lamp.Filament!.HotKelvin, 1);
        var restrike = new CircuitSimulation(Mains120, bank, ResistorUnit.Short, 90, [warm]);
        var cold = new CircuitSimulation(Mains120, bank, ResistorUnit.Short, 90);
        Assert.InRange(restrike.LineAmps / cold.LineAmps, 0.2, 0.8);
    }

    private static BenchPrediction Predict(string bank, string unit, double window = 0.2) =>
        Predictor.Predict(Mains120, Bank.Parse(bank, Mains120), Unit.Parse(unit, Mains120), new PredictionSettings { MeterWindowSeconds = window });
}
