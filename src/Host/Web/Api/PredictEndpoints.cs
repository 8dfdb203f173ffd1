using System.ComponentModel;
using Lampwarden.Analysis.Choosing;
using Lampwarden.Analysis.Inference;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web.Live;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>A prediction with its bank as a tree.</summary>
/// <remarks>All but the tree is the document of <c>predict --json</c>.</remarks>
public sealed record PredictDocument(
    Mains Mains, BankSummary Bank, BankTree BankTree, UnitSummary Unit, SteadyState Steady, Inrush Inrush, ShortedState Shorted, CurrentBand Band, double Contrast,
    IReadOnlyList<string> Notes, IReadOnlyDictionary<string, Interval> Intervals);

/// <summary>The document of <c>choose --json</c>, with the lamps of each bank.</summary>
public sealed record ChooseDocument(IReadOnlyList<ChoiceDocument> Choices, IReadOnlyList<BringUpAdvice> BringUp, int Considered, IReadOnlyList<string> Notes);

/// <summary>One bank, judged for one unit, and how its lamps would look.</summary>
/// <param name="HealthyLamps">Behind a healthy unit; empty where it does not run.</param>
/// <param name="ShortedLamps">Behind a dead short.</param>
public sealed record ChoiceDocument(
    string Bank,
    double LineAmps,
    double UnitVolts,
    double UnitVoltsShare,
    double ShortedAmps,
    double Contrast,
    bool Exists,
    string Verdict,
    string Reason,
    IReadOnlyList<LampState> HealthyLamps,
    IReadOnlyList<LampState> ShortedLamps)
{
    internal static ChoiceDocument Of(BankChoice choice, Mains mains, LampInventory inventory)
    {
        var bank = new BankReading(Lampwarden.Analysis.Lamps.Bank.Parse(choice.Bank, mains, inventory));
        return new(
            choice.Bank, choice.LineAmps, choice.UnitVolts, choice.UnitVoltsShare, choice.ShortedAmps, choice.Contrast, choice.Exists, choice.Verdict, choice.Reason,
            choice.LineAmps > 0 ? bank.Lamps(choice.LineAmps) : [], choice.ShortedAmps > 0 ? bank.Lamps(choice.ShortedAmps) : []);
    }
}

/// <summary>The steps of a bring-up.</summary>
public sealed record BringUpSteps(IReadOnlyList<BringUpStepDocument> Steps);

/// <summary>What should happen, before anything is switched on.</summary>
internal static class PredictEndpoints
{
    public static void Map(IEndpointRouteBuilder api)
    {
        api.MapGet("/predict", Predict).WithTags("Prediction").WithSummary("What should happen for one bank and one unit: the document of predict --json");
        api.MapGet("/choose", Choose).WithTags("Prediction").WithSummary("Every useful bank of the lamps at hand, ranked: the document of choose --json, with the lamps of each");
        api.MapGet("/bring-up", BringUp).WithTags("Prediction").WithSummary("The steps by which a bench's bank can be switched in lamp by lamp");
    }

    private static Results<Ok<PredictDocument>, ProblemHttpResult> Predict(
        [Description("Such as 120 V 60 Hz")] string mains,
        [Description("Such as (75 W || 25 W) + 150 W, or names of the inventory")] string bank,
        [Description("Such as rectifier 45 W 470 uF")] string unit,
        LampInventory inventory,
        [Description("Seconds of the meter's window; 0.2 unless given")] double meterWindow = 0.2)
    {
        if (meterWindow is not (>= 0.001 and <= 10))
        {
            return Problems.Bad(FormattableString.Invariant($"meterWindow is {meterWindow}; expected 0.001 to 10 s."));
        }

        var supply = Mains.Parse(mains);
        var lamps = Bank.Parse(bank, supply, inventory);
        var predicted = Predictor.Predict(supply, lamps, Unit.Parse(unit, supply), new PredictionSettings { MeterWindowSeconds = meterWindow });
        return TypedResults.Ok(new PredictDocument(
            predicted.Mains, predicted.Bank, BankTree.Of(lamps), predicted.Unit, predicted.Steady, predicted.Inrush, predicted.Shorted, predicted.Band, predicted.Contrast,
            predicted.Notes, predicted.Intervals));
    }

    private static Ok<ChooseDocument> Choose(
        [Description("Such as 120 V 60 Hz")] string mains,
        [Description("Such as switch-mode 60 W")] string unit,
        LampInventory inventory,
        [Description("With commas between; the inventory, or the usual lamps, where it is left out")] string? lamps = null)
    {
        var supply = Mains.Parse(mains);
        var found = BankChooser.Choose(supply, Unit.Parse(unit, supply), ChooseCommand.Shelf(lamps, supply, inventory));
        return TypedResults.Ok(new ChooseDocument([.. found.Choices.Select(choice => ChoiceDocument.Of(choice, supply, inventory))], found.BringUp, found.Considered, found.Notes));
    }

    private static Results<Ok<BringUpSteps>, ProblemHttpResult> BringUp(string bench, string bank, string unit, Desks desks)
    {
        if (desks.Find(bench) is not { } desk)
        {
            return Desks.Missing(bench);
        }

        var plan = desk.PlanFor(new SoakRequest(unit, bank, desk.Plan.Options.Soak.PlannedHours));
        return TypedResults.Ok(new BringUpSteps(Documents(desk.StepsOf(plan))));
    }

    internal static IReadOnlyList<BringUpStepDocument> Documents(IReadOnlyList<BringUpStep> steps) =>
        [.. steps.Select(step => new BringUpStepDocument(step.Bank, step.ExpectLowAmps, step.ExpectHighAmps, step.StopAboveAmps, step.Why))];
}
