using Lampwarden.Acquisition;

namespace Lampwarden.Host.Web.Api;

/// <summary>How one meter is doing. Everything counted since its session began.</summary>
public sealed record MeterDocument(
    string Bench,
    string Name,
    Quantity Quantity,
    string Place,
    bool Connected,
    string? Identity,
    int Openings,
    double AskedPerSecond,
    double RatePerSecond,
    double JitterMs,
    double LatencyMs,
    double LongestLatencyMs,
    long Readings,
    long Overloads,
    IReadOnlyDictionary<string, long> Gaps,
    long SkippedPolls,
    long LinesReceived,
    long LinesUsed,
    long LinesPassedOver,
    IReadOnlyDictionary<string, long> LinesRefused,
    IReadOnlyList<string> Problems);

/// <summary>The meters of all benches.</summary>
internal static class MeterEndpoints
{
    public static void Map(IEndpointRouteBuilder api) =>
        api.MapGet("/meters", (Desks desks) => TypedResults.Ok(desks.All.SelectMany(desk => desk.Meters.Select(pair => Document(desk.Name, pair.Meter, pair.Health))).ToList()))
            .WithTags("Meters").WithSummary("How every open meter is doing: rate, jitter, what was refused and why");

    private static MeterDocument Document(string bench, MeterOptions meter, MeterHealth health) => new(
        bench,
        meter.Name,
        meter.Quantity,
        meter.Transport.Kind == "tcp" ? $"{meter.Transport.Host}:{meter.Transport.Port}" : meter.Transport.Port,
        health.Connected,
        health.Identity,
        health.Openings,
        meter.ReadingsPerSecond,
        health.RatePerSecond,
        health.JitterSeconds * 1000,
        health.LatencySeconds * 1000,
        health.LongestLatencySeconds * 1000,
        health.Readings,
        health.Overloads,
        Named(health.Gaps),
        health.SkippedPolls,
        health.LinesReceived,
        health.LinesUsed,
        health.LinesPassedOver,
        Named(health.LinesRefused),
        health.Problems);

    private static Dictionary<string, long> Named(IReadOnlyDictionary<GapReason, long> counts) =>
        counts.ToDictionary(pair => System.Text.Json.JsonNamingPolicy.KebabCaseLower.ConvertName(pair.Key.ToString()), pair => pair.Value);
}
