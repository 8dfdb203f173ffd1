using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Unattended;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>How the watcher itself does; without a dispatch of alerts there is nothing to say.</summary>
internal sealed class Watcher(AlertDispatch? dispatch, HealthBoard? health = null)
{
    public HealthReport? Report => health?.Report();

    public IReadOnlyList<Alert> OpenAlerts => [.. (dispatch?.ServiceAlerts ?? []).Where(alert => alert.IsOpen)];

    public bool Acknowledge(int number, string? by) => dispatch?.Acknowledge(number, by) ?? false;

    /// <summary>Tries one route; null where there is none of that name.</summary>
    public async Task<RouteTrial?> TryAsync(string route, CancellationToken cancellation) =>
        dispatch is null ? null : (await dispatch.TryAsync(route, cancellation)).FirstOrDefault();
}

/// <summary>Alerts about the watcher itself: a dead route, a store in trouble, a loop that hangs.</summary>
internal static class WatcherEndpoints
{
    public static void Map(IEndpointRouteBuilder api)
    {
        api.MapGet("/watcher", (Watcher watcher) => TypedResults.Json(watcher.Report)).WithTags("Watcher").WithSummary("How the watcher itself does, as /health; null in a rehearsal");
        api.MapPost("/watcher/routes/{route}/test", TestAsync).WithTags("Watcher").WithSummary("Sends a message marked as a test by one route");
        var alerts = api.MapGroup("/watcher/alerts").WithTags("Alerts");
        alerts.MapGet("/", (Watcher watcher) => TypedResults.Ok(watcher.OpenAlerts)).WithSummary("Open alerts about the watcher itself");
        alerts.MapPost("/{number:int}/acknowledge", Results<NoContent, ProblemHttpResult> (int number, ByRequest request, Watcher watcher) =>
            watcher.Acknowledge(number, request.By)
                ? TypedResults.NoContent()
                : Problems.Of(StatusCodes.Status409Conflict, "Nothing to change", "There is no such alert, or somebody did this before.")).WithSummary("Somebody has seen it");
    }

    private static async Task<Results<Ok<RouteTrial>, ProblemHttpResult>> TestAsync(string route, Watcher watcher, CancellationToken cancellation) =>
        await watcher.TryAsync(route, cancellation) is { } trial
            ? TypedResults.Ok(trial)
            : Problems.Of(StatusCodes.Status404NotFound, "No such route", $"The configuration names no route '{route}'.");
}
