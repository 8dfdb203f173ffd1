namespace Lampwarden.Host.Alerting.Routes;

/// <summary>What came of trying a route.</summary>
/// <param name="Route">Its name.</param>
/// <param name="Kind">webhook, mail, mqtt or command.</param>
/// <param name="Ok">Whether the other side took the message.</param>
/// <param name="Error">What went wrong; null for nothing.</param>
/// <param name="Seconds">How long it took.</param>
public sealed record RouteTrial(string Route, string Kind, bool Ok, string? Error, double Seconds);
