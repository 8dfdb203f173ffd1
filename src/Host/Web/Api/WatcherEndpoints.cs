using Lampwarden.Host.Alerting;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>How the watcher itself does; without a dispatch of alerts there is nothing to say.</summary>
internal sealed class Watcher(AlertDispatch? dispatch)
{
    public IReadOnlyList<Alert> OpenAlerts => [.. (dispatch?.ServiceAlerts ?? []).Where(alert => alert.IsOpen)];

    public bool Acknowledge(int number, string? by) => dispatch?.Acknowledge(number, by) ?? false;
}

/// <summary>Alerts about the watcher itself: a dead route, a store in trouble, a loop that hangs.</summary>
internal static class WatcherEndpoints
{
    public static void Map(IEndpointRouteBuilder api)
    {
        var alerts = api.MapGroup("/watcher/alerts").WithTags("Alerts");
        alerts.MapGet("/", (Watcher watcher) => TypedResults.Ok(watcher.OpenAlerts)).WithSummary("Open alerts about the watcher itself");
        alerts.MapPost("/{number:int}/acknowledge", Results<NoContent, ProblemHttpResult> (int number, ByRequest request, Watcher watcher) =>
            watcher.Acknowledge(number, request.By)
                ? TypedResults.NoContent()
                : Problems.Of(StatusCodes.Status409Conflict, "Nothing to change", "There is no such alert, or somebody did this before.")).WithSummary("Somebody has seen it");
    }
}
