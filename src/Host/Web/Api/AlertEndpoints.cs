using Lampwarden.Host.Alerting;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>Who does it.</summary>
/// <param name="By">A name; may be left out.</param>
public sealed record ByRequest(string? By = null);

/// <summary>Putting an alert aside.</summary>
/// <param name="Minutes">How long, above 0 to 1440; it comes back by itself, or at once if it grows worse.</param>
/// <param name="By">A name; may be left out.</param>
/// <param name="Reason">Why.</param>
public sealed record ShelveRequest(double Minutes, string? By = null, string? Reason = null);

/// <summary>What a person does about an alert.</summary>
internal static class AlertEndpoints
{
    public static void Map(IEndpointRouteBuilder api)
    {
        var alerts = api.MapGroup("/benches/{bench}/alerts/{number:int}").WithTags("Alerts");
        alerts.MapPost("/acknowledge", (string bench, int number, ByRequest request, Desks desks) =>
            DecideAsync(bench, desks, (book, seconds) => book.Acknowledge(number, seconds, request.By))).WithSummary("Somebody has seen it");
        alerts.MapPost("/shelve", (string bench, int number, ShelveRequest request, Desks desks) => request.Minutes is > 0 and <= 1440
            ? DecideAsync(bench, desks, (book, seconds) => book.Shelve(number, request.Minutes * 60, seconds, request.By, request.Reason))
            : Task.FromResult<Results<Ok<Alert>, ProblemHttpResult>>(Problems.Bad(FormattableString.Invariant($"minutes is {request.Minutes}; expected above 0 to 1440."))))
            .WithSummary("Puts it aside for a time");
        alerts.MapPost("/unshelve", (string bench, int number, ByRequest request, Desks desks) =>
            DecideAsync(bench, desks, (book, seconds) => book.Unshelve(number, seconds, request.By))).WithSummary("Takes it from the shelf before its time");
        alerts.MapPost("/reset", (string bench, int number, ByRequest request, Desks desks) =>
            DecideAsync(bench, desks, (book, seconds) => book.Reset(number, seconds, request.By))).WithSummary("Releases a latched alert");
    }

    private static async Task<Results<Ok<Alert>, ProblemHttpResult>> DecideAsync(string bench, Desks desks, Func<AlertBook, double, AlertChange?> decision)
    {
        if (desks.Find(bench) is not { } desk)
        {
            return Desks.Missing(bench);
        }

        if (!desk.HasAlerts)
        {
            return BenchEndpoints.NoRun(bench);
        }

        return await desk.DecideAsync(decision) is { } change
            ? TypedResults.Ok(change.Alert)
            : Problems.Of(StatusCodes.Status409Conflict, "Nothing to change", "There is no such alert, or somebody did this before.");
    }
}
