using Lampwarden.Host.Commands;
using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Http;
using Microsoft.AspNetCore.Routing;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// <c>GET /health</c>: 200 while every bench is watched (also when degraded: a restart would not mend a mail server), 503 when
/// one is not. <c>GET /metrics</c>: the figures in Prometheus text.
/// </summary>
public static class HealthEndpoints
{
    /// <summary>Adds both.</summary>
    public static IEndpointRouteBuilder MapHealth(this IEndpointRouteBuilder routes, HealthBoard board, MetricsText metrics)
    {
        routes.MapGet("/health", () =>
        {
            var report = board.Report();
            return Results.Json(report, Json.Pretty, statusCode: report.Status == "stuck" ? StatusCodes.Status503ServiceUnavailable : StatusCodes.Status200OK);
        }).WithSummary("How the watcher itself does");
        routes.MapGet("/metrics", () => Results.Text(metrics.Write(), "text/plain; version=0.0.4; charset=utf-8")).WithSummary("The watcher's figures as Prometheus text");
        return routes;
    }
}
