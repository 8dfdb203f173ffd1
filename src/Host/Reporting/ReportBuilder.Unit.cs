using System.Text.Json;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

public static partial class ReportBuilder
{
    private static ReportSection Circumstances(RunRecord record)
    {
        var info = record.Info;
        var facts = new List<(string, string)>
        {
            ("Unit", info.UnitLabel ?? "not named"),
            ("Started", Said.Utc(info.StartedUtc)),
            ("Taken as", info.Unit),
            ("Ended", Said.Utc(info.EndedUtc)),
            ("Lamp bank", info.Bank),
            ("Length", $"{Said.Length(info.LengthSeconds)}{(double.IsFinite(info.PlannedHours) ? $" of {Said.Length(info.PlannedHours * 3600)} planned" : "")}"),
            ("Mains", info.Mains),
            ("Readings", FormattableString.Invariant($"{info.Readings:#,0}{(info.Lost > 0 ? $", {info.Lost:#,0} lost" : "")}")),
            ("Bench", info.Bench),
        };
        facts.Add(("Recorded by", info.Software.Length > 0 ? info.Software : Said.Unknown));
        if (info.ResumedFrom is { } earlier)
        {
            facts.Add(("Carries on", $"run {earlier}, whose record holds what came before"));
        }

        facts.AddRange(Meters(record.ConfigurationJson));
        return new("Unit, bench and meter", [new ReportFacts(facts)]);
    }

    private static IEnumerable<(string, string)> Meters(string configurationJson)
    {
        BenchOptions? bench;
        try
        {
            bench = JsonSerializer.Deserialize<BenchOptions>(configurationJson, Json.Compact);
        }
        catch (JsonException)
        {
            // A run of another version, or one imported bare: the rest of the report stands without it.
            yield break;
        }

        foreach (var meter in bench?.Meters ?? [])
        {
            var accuracy = FormattableString.Invariant($"±({meter.Accuracy.PercentOfReading} % + {meter.Accuracy.Counts} counts of {meter.Accuracy.CountSize})");
            var response = meter.Response == "trueRms" ? "true RMS" : "not true RMS";
            yield return (
                meter.Quantity == Acquisition.Quantity.LineCurrent ? "Line meter" : "Mains meter",
                FormattableString.Invariant($"{meter.Name}: {meter.ReadingsPerSecond}/s, {response}, {meter.Coupling} coupled, {accuracy}"));
        }
    }

    private static ReportSection PredictedAndSeen(SoakStore store, RunRecord record, RunFigures figures)
    {
        var prediction = record.PredictionJson;
        double Predicted(params string[] path) => Said.Within(prediction, path);
        var (low, high) = (Predicted("band", "lowAmps"), Predicted("band", "highAmps"));
        var rows = new List<IReadOnlyList<string>>
        {
            Row("first reading after switch-on", Predicted("inrush", "firstReadingAmps"), figures.FirstAmps, Said.Amps, "worst switching instant, so the seen one may be lower"),
            Row("settled, first ten minutes", Predicted("steady", "lineAmps"), figures.SettledAmps, Said.Amps,
                double.IsFinite(low) ? $"band {Said.Amps(low)} to {Said.Amps(high)}: {Inside(figures.SettledAmps, low, high)}" : ""),
            Row("at the end, last ten minutes", Predicted("steady", "lineAmps"), figures.EndAmps, Said.Amps,
                double.IsFinite(low) ? Inside(figures.EndAmps, low, high) : ""),
            Row("time to settle within 10 %", Predicted("inrush", "settleSeconds"), figures.SettleSeconds, Said.Length, ""),
            Row("drift after settling", double.NaN, 1000 * figures.DriftAmpsPerHour, value => Said.Number(value, "+0.000;-0.000;0.000", "mA/h"), ""),
            Row("with the output shorted", Predicted("shorted", "lineAmps"), double.NaN, Said.Amps, "the bank fully lit: no healthy reading comes near"),
        };
        var (estimates, note) = UnitEstimates(record, figures);
        rows.AddRange(estimates);
        if (double.IsFinite(figures.MainsVolts))
        {
            rows.Add(Row("mains, mean", Predicted("mains", "volts"), figures.MainsVolts, Said.Volts, ""));
        }

        var blocks = new List<ReportBlock>
        {
            new ReportTable(["", "predicted", "seen", "remark"], [0.28, 0.17, 0.17, 0.38], rows, new HashSet<int> { 1, 2 }),
        };
        if (prediction is null)
        {
            blocks.Add(new ReportText("This run had no prediction: it was watched against its own level only.", Small: true));
        }

        if (note is not null)
        {
            blocks.Add(new ReportText(note, Small: true));
        }

        blocks.AddRange(ReferenceUnits.ReportBlocks(store, record, figures));
        return new("Predicted and seen", blocks);
    }

    private static IReadOnlyList<string> Row(string what, double predicted, double seen, Func<double, string> said, string remark) =>
        [what, said(predicted), said(seen), remark];

    private static string Inside(double amps, double low, double high) =>
        double.IsNaN(amps) ? "" : amps < low ? "below the band" : amps > high ? "above the band" : "inside the band";

    private static ReportSection Cautions() => new("What this record does not say", [new ReportList([
        "A lamp limiter limits current; it does not isolate. Every part of the unit was live at mains potential throughout.",
        "Running behind lamps, the unit did not see its full supply voltage and was not loaded as in service. Passing this soak is no proof that it is safe to use.",
        "A repaired unit still needs the electrical safety test that local rules demand (in Europe for instance EN 50678 after repair), by a person entitled to do it.",
        "The watch reads a meter. It is not a protective device, and a signature it names is a hint where to look, not a diagnosis.",
    ])]);

    private static ReportSection HowToCheck(RunRecord record) => new("Checking this record", [new ReportText(
        $"The number at the foot of this page is the SHA-256 of this run's readings as 'lampwarden export {record.Info.Run} --format csv' writes them: any tool that "
        + $"knows SHA-256 can check it. 'lampwarden report {record.Info.Run} --verify FILE' compares this very file with the stored readings. "
        + "The number shows that readings were not altered since this report was made; it does not show who made it.",
        Small: true)]);
}
