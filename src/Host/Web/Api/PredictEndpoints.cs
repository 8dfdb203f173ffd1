using System.ComponentModel;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web.Live;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>A prediction with its bank as a tree.</summary>
/// <remarks>All but the tree is the document of <c>predict --json</c>.</remarks>
public sealed record PredictDocument(
    Mains Mains, BankSummary Bank, BankTree BankTree, UnitSummary Unit, SteadyState Steady, Inrush Inrush, ShortedState Shorted, CurrentBand Band, double Contrast);

/// <summary>The steps of a bring-up.</summary>
public sealed record BringUpSteps(IReadOnlyList<BringUpStepDocument> Steps);

/// <summary>What should happen, before anything is switched on.</summary>
internal static class PredictEndpoints
{
    public static void Map(IEndpointRouteBuilder api)
    {
        api.MapGet("/predict", Predict).WithTags("Prediction").WithSummary("What should happen for one bank and one unit: the document of predict --json");
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
            predicted.Mains, predicted.Bank, BankTree.Of(lamps), predicted.Unit, predicted.Steady, predicted.Inrush, predicted.Shorted, predicted.Band, predicted.Contrast));
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
