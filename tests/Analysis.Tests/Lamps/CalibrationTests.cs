using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Tests.Lamps;

public sealed class CalibrationTests
{
    private static readonly Lamp Nameplate = Lamp.FromNameplate("north", 60, 120);

    // A lamp that differs from its nameplate, and what its measurements would be.
    private static readonly Lamp Truth = Nameplate.With(Nameplate.Filament! with { Watts = 57, HotKelvin = 2690, GasShare = 0.05 });

    [Fact]
    public void Calibrated_TwoPoints_GoesThroughBoth()
    {
        var lamp = Nameplate.Calibrated(Measure(dim: false));

        // A tabulated curve is within 2e-5 of its equations.
        Assert.Equal(1, lamp.Curve.Amps(119.4, out _) / Truth.Curve.Amps(119.4, out _), 4e-5);
        Assert.Equal(Truth.ColdOhms, lamp.ColdOhms, 1e-3 * Truth.ColdOhms);
        Assert.Equal(Truth.Curve.Kelvin(119.4), lamp.Filament!.HotKelvin, 1);
        Assert.True(lamp.Tolerance.WattsShare < Nameplate.Tolerance.WattsShare / 2);
    }

    [Fact]
    public void Calibrated_ThirdPoint_TakesTheDimEndToo()
    {
        var twoPoints = Nameplate.Calibrated(Measure(dim: false));
        var lamp = Nameplate.Calibrated(Measure(dim: true));
        foreach (var volts in new[] { 3.0, 6, 12, 24, 48, 96 })
        {
            Assert.Equal(1, lamp.Curve.Amps(volts, out _) / Truth.Curve.Amps(volts, out _), 0.004);
        }

        Assert.True(Math.Abs(twoPoints.Curve.Amps(6, out _) / Truth.Curve.Amps(6, out _) - 1) > 0.05);
        Assert.True(lamp.Tolerance.GasHigh - lamp.Tolerance.GasLow < 0.04);
    }

    [Theory]
    [InlineData(25, "Cold ohms too high", "lamp still warm")]
    [InlineData(11, "Cold ohms too low", "in parallel")]
    public void Calibrated_ImpossibleRatio_IsRefusedWithLikelyCauses(double coldOhms, string which, string cause)
    {
        var fault = Assert.Throws<CalibrationException>(() => Nameplate.Calibrated(new LampCalibration(coldOhms, 22, 0.497, 119.4)));
        Assert.Equal("north", fault.LampName);
        Assert.Contains("2200 to 3100 K", fault.Message, StringComparison.Ordinal);
        Assert.Contains(which, fault.Message, StringComparison.Ordinal);
        Assert.Contains(cause, fault.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(16.1, 22, 0.25, 119.4)]
    [InlineData(16.1, 22, 0.9, 119.4)]
    [InlineData(16.1, 22, -0.5, 119.4)]
    [InlineData(16.1, 122, 0.497, 119.4)]
    [InlineData(0, 22, 0.497, 119.4)]
    public void Calibrated_ImpossibleValue_IsRefused(double cold, double room, double amps, double volts) =>
        Assert.Throws<CalibrationException>(() => Nameplate.Calibrated(new LampCalibration(cold, room, amps, volts)));

    [Fact]
    public void Calibrated_ThirdPointOffEveryCurve_IsRefused() =>
        Assert.Contains(
            "third point",
            Assert.Throws<CalibrationException>(() => Nameplate.Calibrated(new LampCalibration(16.1, 22, 0.497, 119.4, 0.3, 12))).Message,
            StringComparison.Ordinal);

    [Fact]
    public void Calibrated_WarmRoom_IsTakenIntoAccount()
    {
        var atTwenty = Nameplate.Calibrated(new LampCalibration(16, 20, 0.5, 120));
        var atThirty = Nameplate.Calibrated(new LampCalibration(16, 30, 0.5, 120));

        // Warmer while measured, so colder ohms at 20 C: 0.44 % a kelvin by the tungsten table.
        Assert.Equal(0.956, atThirty.ColdOhms / atTwenty.ColdOhms, 0.003);
    }

    [Fact]
    public void CooledKelvin_SixtyWattsAfterTwentySeconds_IsWithinOnePercentOfColdResistance()
    {
        var filament = Nameplate.Filament!;
        Assert.Equal(filament.HotKelvin, Nameplate.CooledKelvin(filament.HotKelvin, 0));
        var soon = Nameplate.CooledKelvin(filament.HotKelvin, 0.5);
        var late = Nameplate.CooledKelvin(filament.HotKelvin, 20);
        Assert.InRange(soon, 600, 1400);
        Assert.Equal(1, filament.Ohms(late) / filament.ColdOhms, 0.01);
        Assert.True(filament.Ohms(Nameplate.CooledKelvin(filament.HotKelvin, 3)) > 1.02 * filament.ColdOhms);
    }

    private static LampCalibration Measure(bool dim) => new(
        Truth.Filament!.Ohms(295.15), 22, Truth.Curve.Amps(119.4, out _), 119.4, dim ? Truth.Curve.Amps(9, out _) : double.NaN, dim ? 9 : double.NaN);
}
