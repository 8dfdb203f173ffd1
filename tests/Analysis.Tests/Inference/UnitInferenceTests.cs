using Lampwarden.Analysis.Inference;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Inference;

public sealed class UnitInferenceTests
{
    private static readonly Mains Mains120 = new(120, 60);
    private static readonly PredictedMeter Meter = new() { Coupling = MeterCoupling.AcDc };

    [Theory]
    [InlineData("60 W", 240)]
    [InlineData("60 W", 1000)]
    [InlineData("60 W || 40 W", 100)]
    public void Infer_CurrentOfAKnownResistor_GivesItBack(string bankText, double ohms)
    {
        var bank = Bank.Parse(bankText, Mains120);
        var amps = new SteadySolver(bank, new ResistorUnit("unit", ohms).NewResponse(Mains120)).Solve(120).Amps;
        var found = new UnitInference(Mains120, bank, Meter).Infer(amps, 120);
        Assert.Equal(ohms, found.Ohms, 1e-5 * ohms);
        Assert.Equal(amps * amps * ohms, found.Watts, 1e-4);
        Assert.False(found.IsIllConditioned);
        Assert.True(found.OhmsInterval.Contains(ohms) && found.VoltsInterval.Contains(amps * ohms));
    }

    [Fact]
    public void Infer_NearAShort_SaysBelowAndNotHowMuch()
    {
        var found = new UnitInference(Mains120, Bank.Parse("60 W", Mains120), Meter).Infer(0.495, 120);
        Assert.True(found.IsIllConditioned);
        Assert.True(double.IsNaN(found.Ohms));
        Assert.InRange(found.BelowOhms, 10, 40);
        Assert.Contains("less than", found.Note, StringComparison.Ordinal);
    }

    [Fact]
    public void Infer_MainsNotMeasured_IsLessSure()
    {
        var inference = new UnitInference(Mains120, Bank.Parse("60 W", Mains120), Meter);
        var (measured, assumed) = (inference.Infer(0.1, 120), inference.Infer(0.1));
        Assert.Equal(measured.Volts, assumed.Volts, 1e-9);
        Assert.True(assumed.VoltsInterval.High - assumed.VoltsInterval.Low > 1.5 * (measured.VoltsInterval.High - measured.VoltsInterval.Low));
    }

    [Theory]
    [InlineData("100 W", "transformer 60 VA", UnitNature.Reactive)]
    [InlineData("200 W", "motor 60 W", UnitNature.Reactive)]
    [InlineData("60 W", "rectifier 45 W 470 uF", UnitNature.Rectifying)]
    [InlineData("60 W", "rectifier 6 W 100 uF", UnitNature.Rectifying)]
    [InlineData("100 W", "switch-mode 20 W", UnitNature.Rectifying)]
    public void Infer_ReactiveOrRectifyingUnit_BoundsHoldTheTruth(string bankText, string unitText, UnitNature nature)
    {
        var bank = Bank.Parse(bankText, Mains120);
        Assert.True(new SteadySolver(bank, Unit.Parse(unitText, Mains120).NewResponse(Mains120)).TrySolve(120, out var truth));
        var found = new UnitInference(Mains120, bank, Meter).Infer(truth.Amps, 120, nature);
        Assert.True(double.IsNaN(found.Volts));
        Assert.True(found.VoltsInterval.Contains(truth.Volts), $"{truth.Volts} V outside {found.VoltsInterval}");
        Assert.True(found.WattsInterval.Contains(truth.Watts), $"{truth.Watts} W outside {found.WattsInterval}");
    }

    [Theory]
    [InlineData("60 W", "rectifier 45 W 470 uF", 0.8)]
    [InlineData("60 W || 60 W", "transformer 60 VA 40 W", 1.15)]
    [InlineData("100 W", "switch-mode 20 W", 0.9)]
    public void ModelInfer_UnitOffItsPlate_FindsHowMuch(string bankText, string unitText, double factor)
    {
        var bank = Bank.Parse(bankText, Mains120);
        var plate = Unit.Parse(unitText, Mains120);
        Assert.True(new SteadySolver(bank, plate.Scaled(factor).NewResponse(Mains120)).TrySolve(120, out var truth));
        Assert.True(new ModelInference(Mains120, bank, plate, Meter).TryInfer(truth.Amps, 120, out var found, out var rating));
        Assert.Equal(factor, rating, 0.003);
        Assert.Equal(truth.Watts, found.Watts, 0.003 * truth.Watts);
        Assert.True(found.WattsInterval.Contains(truth.Watts));
    }

    [Fact]
    public void Infer_AcCoupledMeterNearAShort_WarnsOfTheHalfWave() =>
        Assert.Contains(
            "half-wave short",
            new UnitInference(Mains120, Bank.Parse("60 W", Mains120), new PredictedMeter { Coupling = MeterCoupling.Ac }).Infer(0.495, 120).Note,
            StringComparison.Ordinal);

    [Theory]
    [InlineData(0)]
    [InlineData(-0.1)]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void Infer_NoReading_Throws(double amps) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => new UnitInference(Mains120, Bank.Parse("60 W", Mains120), Meter).Infer(amps));

    // Truth drawn from the stated tolerances, read by a meter with an error inside its bound: the claimed 95 % must hold.
    [Theory]
    [InlineData("60 W", 240)]
    [InlineData("60 W", 1000)]
    [InlineData("60 W || 40 W", 100)]
    [InlineData("100 W + 100 W", 400)]
    public void Infer_TruthDrawnFromTheTolerances_FallsInsideAsOftenAsClaimed(string bankText, double ohms)
    {
        const int Draws = 2000;
        var bank = Bank.Parse(bankText, Mains120);
        var inference = new UnitInference(Mains120, bank, Meter);
        var inputs = new BenchInputs(Mains120, bank, ResistorUnit.Short, new PredictionSettings { MainsUncertainty = 0.02 });
        var random = new Random(7);
        var inside = new int[3];
        for (var draw = 0; draw < Draws; draw++)
        {
            var values = inputs.Inputs.Select(input => input.Draw(random.NextDouble())).ToArray();
            var trueVolts = inputs.MainsVolts(values);
            var amps = new BankSolver(inputs.BankOf(values)).Feed(trueVolts, ohms);
            var shown = amps + Meter.BoundAmps(amps) * (2 * random.NextDouble() - 1);
            var found = inference.Infer(shown);
            inside[0] += found.VoltsInterval.Contains(amps * ohms) ? 1 : 0;
            inside[1] += found.WattsInterval.Contains(amps * amps * ohms) ? 1 : 0;
            inside[2] += found.OhmsInterval.Contains(ohms) ? 1 : 0;
        }

        Assert.All(inside, count => Assert.InRange(count / (double)Draws, 0.93, 0.97));
    }
}
