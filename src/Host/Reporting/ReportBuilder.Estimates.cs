using Lampwarden.Analysis.Inference;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

public static partial class ReportBuilder
{
    /// <summary>Rows for the unit's own volts and watts, with what they rest on below.</summary>
    private static (IEnumerable<IReadOnlyList<string>> Rows, string? Note) UnitEstimates(RunRecord record, RunFigures figures)
    {
        var (estimate, whyNot) = UnitEstimate.For(record);
        var settled = estimate?.At(figures.SettledAmps, figures.MainsVolts);
        var end = estimate?.At(figures.EndAmps, figures.EndMainsVolts);
        double Predicted(string name) => Said.Within(record.PredictionJson, "steady", name);
        IReadOnlyList<string> Line(string what, string predicted, InferredUnit? unit, Func<InferredUnit, (double Value, Interval Interval)> take, Func<double, string> said) =>
            unit is null
                ? [what, predicted, Said.Unknown, whyNot ?? ""]
                : [what, predicted, said(take(unit).Value), Between(take(unit).Interval, said)];
        return (
            [
                Line("across the unit, settled", Said.Volts(Predicted("unitVolts")), settled, unit => (unit.Volts, unit.VoltsInterval), Said.Volts),
                Line("across the unit, at the end", Said.Volts(Predicted("unitVolts")), end, unit => (unit.Volts, unit.VoltsInterval), Said.Volts),
                Line("power of the unit, settled", Said.Watts(Predicted("unitWatts")), settled, unit => (unit.Watts, unit.WattsInterval), Said.Watts),
                Line("power of the unit, at the end", Said.Watts(Predicted("unitWatts")), end, unit => (unit.Watts, unit.WattsInterval), Said.Watts),
            ],
            settled is null && end is null
                ? null
                : $"The unit's own volts and watts are worked back from the line current through the bank, with 95 % intervals from the lamps' tolerance, the meter and the mains. {settled?.Note} {(end?.Note == settled?.Note ? "" : $"At the end: {end?.Note}")}".TrimEnd());
    }

    private static string Between(Interval interval, Func<double, string> said) => double.IsNaN(interval.Low)
        ? ""
        : $"{said(interval.Low)} to {said(interval.High)}";
}
