using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Analysis.Uncertainty;

namespace Lampwarden.Host.Commands.Calibrating;

/// <summary>One point of a lamp's predicted curve, before and after its calibration.</summary>
/// <param name="UnitOhms">Resistor behind the lamp; 0 is a short.</param>
/// <param name="BeforeAmps">Predicted before.</param>
/// <param name="BeforeLowAmps">Lower end of the 95 % interval that the lamp alone leaves.</param>
/// <param name="BeforeHighAmps">Upper end.</param>
/// <param name="AfterAmps">Predicted with the calibration.</param>
/// <param name="AfterLowAmps">Lower end.</param>
/// <param name="AfterHighAmps">Upper end.</param>
internal sealed record CurvePoint(
    double UnitOhms, double BeforeAmps, double BeforeLowAmps, double BeforeHighAmps, double AfterAmps, double AfterLowAmps, double AfterHighAmps);

/// <summary>What a calibration changes: the line current with the lamp alone in the limiter, from shorted to dim.</summary>
internal static class CalibrationTable
{
    // The unit's ohms as multiples of the lit lamp's: from fully lit to a filament that does not glow.
    private static readonly double[] Multiples = [0, 0.5, 2, 6];

    // The supply and the resistor are taken as known, so that what is left of the interval is the lamp's.
    private static readonly PredictionSettings LampAlone = new() { MainsUncertainty = 1e-4, UnitUncertainty = 1e-4 };

    public static IReadOnlyList<CurvePoint> Of(Mains mains, Lamp before, Lamp after) => [.. Multiples.Select(multiple =>
    {
        var ohms = Math.Round(multiple * before.RatedVolts * before.RatedVolts / before.RatedWatts, 0);
        var (old, oldInterval) = Predict(mains, before, ohms);
        var (now, nowInterval) = Predict(mains, after, ohms);
        return new CurvePoint(ohms, old, oldInterval.Low, oldInterval.High, now, nowInterval.Low, nowInterval.High);
    })];

    public static void Tell(TextWriter prose, IReadOnlyList<CurvePoint> points)
    {
        prose.WriteLine("  behind it     predicted before               with the calibration           change   (95 % interval the lamp leaves)");
        foreach (var point in points)
        {
            prose.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"  {(point.UnitOhms == 0 ? "a short" : $"{point.UnitOhms:0} ohm"),-13} {point.BeforeAmps,7:0.0000} A ({point.BeforeLowAmps:0.0000}-{point.BeforeHighAmps:0.0000})  {point.AfterAmps,7:0.0000} A ({point.AfterLowAmps:0.0000}-{point.AfterHighAmps:0.0000})  {Math.Round(100 * ((point.AfterAmps / point.BeforeAmps) - 1), 1) + 0.0,6:+0.0;-0.0;0.0} %"));
        }
    }

    private static (double Amps, Interval Interval) Predict(Mains mains, Lamp lamp, double ohms)
    {
        var bank = Bank.Parse(lamp.Name, mains, new LampInventory([lamp]));
        var unit = ohms == 0 ? ResistorUnit.Short : Unit.Parse(string.Create(CultureInfo.InvariantCulture, $"resistor {ohms} ohm"), mains);
        var prediction = Predictor.Predict(mains, bank, unit, LampAlone);
        return (prediction.Steady.LineAmps, prediction.Intervals.TryGetValue("steady.lineAmps", out var interval) ? interval : Interval.Unknown);
    }
}
