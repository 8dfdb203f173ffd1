using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Prediction;

/// <summary>
/// Readings told at the bench: common practice, no published source. Lamp age, rated volts and line volts of those readings are not
/// known, so each is held to the residual that its own uncertainty explains and no tighter: the 60 W reading, for one, fits a lamp
/// made for 130 V.
/// </summary>
public sealed class CommonPracticeTests
{
    private static readonly Mains Mains120 = new(120, 60);

    [Theory]
    [InlineData("7 W", 0.054, 0.085)]
    [InlineData("40 W", 0.331, 0.010)]
    [InlineData("60 W", 0.440, 0.140)]
    [InlineData("60 W 130 V", 0.440, 0.010)]
    [InlineData("100 W", 0.760, 0.100)]
    [InlineData("250 W", 2.0, 0.045)]
    public void Predict_ShortBehindOneLamp_NearCommonPractice(string bank, double amps, double within) =>
        Assert.Equal(1, Predict(bank, "short").Steady.LineAmps / amps, within);

    [Theory]
    [InlineData("60 W", "lamp 100 W", 0.4, 0.055)]
    [InlineData("60 W + 40 W", "lamp 100 W", 0.25, 0.04)]
    public void Predict_LampBehindLamps_NearCommonPractice(string bank, string unit, double amps, double within) =>
        Assert.Equal(1, Predict(bank, unit).Steady.LineAmps / amps, within);

    [Fact]
    public void Predict_SixtyBesideFortyFeedingHundred_InsideTheRangeTold() =>
        Assert.InRange(Predict("60 W || 40 W", "lamp 100 W").Steady.LineAmps, 0.5, 0.57);

    [Fact]
    public void ColdOhms_FortyWatts_NearCommonPractice() =>
        Assert.Equal(1, Lamp.FromNameplate("lamp", 40, 120).ColdOhms / 26, 0.07);

    [Fact]
    public void Predict_EightOhmsInALampsPlace_FollowsOhmsLaw()
    {
        var prediction = Predict("8 ohm", "short");
        Assert.Equal(15, prediction.Steady.LineAmps, 1e-6);
        Assert.Equal(15 * Math.Sqrt(2), prediction.Inrush.PeakAmps, 1e-3);
    }

    // Lit together in series: the smallest lamp glows first, then the next.
    [Theory]
    [InlineData("60 W + 100 W")]
    [InlineData("40 W + 100 W")]
    [InlineData("40 W + 60 W + 100 W")]
    [InlineData("25 W + 40 W")]
    [InlineData("60 W + 75 W")]
    public void Predict_SeriesString_LightsUpFromTheSmallest(string bank)
    {
        var times = Predict(bank, "short").Steady.Lamps
            .Select(lamp => double.IsNaN(lamp.FirstGlowSeconds) ? double.PositiveInfinity : lamp.FirstGlowSeconds).ToArray();
        Assert.True(double.IsFinite(times[0]));
        Assert.Equal(times.Order(), times);
        Assert.Equal(times.Length, times.Distinct().Count());
    }

    private static BenchPrediction Predict(string bank, string unit) =>
        Predictor.Predict(Mains120, Bank.Parse(bank, Mains120), Unit.Parse(unit, Mains120));
}
