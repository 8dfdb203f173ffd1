using System.Globalization;
using System.Text.Json;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

/// <summary>What a reference unit says of the next unit of its model. Currents in A.</summary>
/// <param name="Run">The run of the reference.</param>
/// <param name="SteadyAmps">What the next unit should settle at.</param>
/// <param name="Why">One sentence: from what, and how wide.</param>
public sealed record ReferenceBand(string Model, string Run, double SteadyAmps, double LowAmps, double HighAmps, string Why);

/// <summary>
/// A passed run can stand as the reference of its unit model. The lamps' tolerance, the largest part of the physical band,
/// is then measured rather than assumed, as long as the same bank is used; what remains is the spread between units,
/// the mains and the meter.
/// </summary>
public static class ReferenceUnits
{
    // Half-widths in percent. Units of one model differ by their transformers' and capacitors' tolerances (common practice,
    // no published source); mains of +-5 % moves a lamp-limited current by about 0.55 of that where it is not measured.
    private const double BetweenUnitsPercent = 4;
    private const double MainsPercent = 2.75;
    private const double OtherBankPercent = 5;

    /// <summary>The band for the next unit of a model on a bench.</summary>
    /// <param name="bank">Bank text of the bench.</param>
    /// <param name="mains">Mains text of the bench.</param>
    /// <param name="predictedAmps">What physics predicts there; used to carry a reference over to another bank. NaN: unknown.</param>
    /// <returns>Null where the model has no reference, or none that can be carried over.</returns>
    public static ReferenceBand? BandFor(SoakStore store, string model, string bank, string mains, double predictedAmps)
    {
        if (store.Reference(model) is not { } run)
        {
            return null;
        }

        var record = store.Run(run);
        var figures = RunFigures.Of(store, run);
        var sameBank = record.Info.Bank == bank && record.Info.Mains == mains;
        var scale = sameBank ? 1 : predictedAmps / Said.Within(record.PredictionJson, "steady", "lineAmps");
        if (!double.IsFinite(figures.SettledAmps * scale))
        {
            return null;
        }

        // Between settling and the end the reference itself moved: a unit caught anywhere on that way is as it should be.
        var (least, most) = (Math.Min(figures.SettledAmps, figures.EndAmps) * scale, Math.Max(figures.SettledAmps, figures.EndAmps) * scale);
        var percent = Math.Sqrt(Square(BetweenUnitsPercent) + Square(MainsPercent) + (sameBank ? 0 : Square(OtherBankPercent)));
        var carried = sameBank ? "the same bank" : string.Create(CultureInfo.InvariantCulture, $"another bank ({record.Info.Bank} on {record.Info.Mains}), carried over by {scale:0.000}");
        return new ReferenceBand(
            model, run, figures.SettledAmps * scale, least * (1 - (percent / 100)), most * (1 + (percent / 100)),
            string.Create(CultureInfo.InvariantCulture, $"Reference unit of model '{model}' (run {run}) settled at {figures.SettledAmps:0.0000} A behind {carried}; another unit may differ by {percent:0.0} %."));
    }

    /// <summary>What a report says of a run's reference.</summary>
    internal static IEnumerable<ReportBlock> ReportBlocks(SoakStore store, RunRecord record, RunFigures figures)
    {
        foreach (var model in store.ReferenceModels(record.Info.Run))
        {
            yield return new ReportText($"This run is the reference of unit model '{model}'.");
        }

        var predicted = Said.Within(record.PredictionJson, "steady", "lineAmps");
        if (ModelOf(record) is { } own && BandFor(store, own, record.Info.Bank, record.Info.Mains, predicted) is { } band && band.Run != record.Info.Run)
        {
            yield return new ReportText($"{band.Why} {Explain(band, figures)}");
        }
    }

    /// <summary>How a run lies to its reference, in a sentence.</summary>
    public static string Explain(ReferenceBand band, RunFigures figures)
    {
        var difference = Said.Percent(100 * (figures.SettledAmps - band.SteadyAmps) / band.SteadyAmps);
        return figures.SettledAmps switch
        {
            double.NaN => "This unit never settled, so it cannot be compared.",
            var amps when amps > band.HighAmps => $"This unit settled {difference} from it, above the band: it loads the bank more than its like. Look for a leaky part, a shorted turn, or a load that the reference did not have.",
            var amps when amps < band.LowAmps => $"This unit settled {difference} from it, below the band: part of it does not run as in its like, or a lamp of the bank is weaker.",
            _ => $"This unit settled {difference} from it, inside the band.",
        };
    }

    /// <summary>The unit model that a run's configuration names; null for none.</summary>
    public static string? ModelOf(RunRecord record)
    {
        using var document = JsonDocument.Parse(record.ConfigurationJson);
        return document.RootElement.ValueKind == JsonValueKind.Object
            && document.RootElement.TryGetProperty("unitModel", out var model) && model.ValueKind == JsonValueKind.String
            ? model.GetString() : null;
    }

    private static double Square(double value) => value * value;
}
