using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.CutOff;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Forwarding;

namespace Lampwarden.Host.Unattended;

/// <summary>How the watcher itself does. Names are contract: docs/service.md.</summary>
/// <param name="Status">ok; degraded: it watches, but something of it needs a person; stuck: a bench is not watched.</param>
/// <param name="Benches">Seconds since each bench's loop handled a reading; null where no soak is under way.</param>
/// <param name="Forwarding">How forwarding to InfluxDB goes; null where nothing is forwarded.</param>
/// <param name="Problems">What is wrong, in sentences; empty when ok.</param>
public sealed record HealthReport(
    string Status,
    string Instance,
    string Software,
    DateTimeOffset Utc,
    IReadOnlyList<BenchPulse> Benches,
    StoreHealth Store,
    ForwardingHealth? Forwarding,
    IReadOnlyList<RouteHealth> Routes,
    IReadOnlyList<CutOffHealth> CutOffs,
    IReadOnlyList<Alert> Alerts,
    IReadOnlyList<string> Problems);

/// <summary>A bench's sign of life.</summary>
public sealed record BenchPulse(string Bench, double? SilentSeconds);

/// <summary>A cut-off's state. It is a convenience, no protective device.</summary>
public sealed record CutOffHealth(string Bench, CutOffPosition Position, DateTimeOffset Utc, string Why);

/// <summary>Puts the report together. Safe from any thread.</summary>
public sealed class HealthBoard(
    string instance, IReadOnlyList<string> benches, Pulse pulse, double stuckAfterSeconds, Func<StoreHealth> store, Func<ForwardingHealth>? forwarding, AlertDispatch dispatch, CutOffGuard? cutOff, TimeProvider time)
{
    /// <summary>How it does now.</summary>
    public HealthReport Report()
    {
        var stuck = pulse.Stuck(stuckAfterSeconds);
        var (health, sent, routes) = (store(), forwarding?.Invoke(), dispatch.Health);
        var problems = stuck.Select(bench => FormattableString.Invariant($"{bench}: no reading handled for {pulse.SecondsSince(bench):F0} s."))
            .Concat(health.Trouble is { } trouble ? [trouble] : [])
            .Concat(sent?.Trouble is { } refused ? [$"InfluxDB: {refused}"] : [])
            .Concat(routes.Where(route => route.State == RouteState.Down).Select(route => $"Route {route.Name} is down: {route.LastError}."))
            .ToList();
        return new HealthReport(
            stuck.Count > 0 ? "stuck" : problems.Count > 0 ? "degraded" : "ok",
            instance,
            Product.NameAndVersion,
            time.GetUtcNow(),
            [.. benches.Select(bench => new BenchPulse(bench, pulse.SecondsSince(bench)))],
            health,
            sent,
            routes,
            [.. (cutOff?.Units.Values ?? []).Select(unit => (unit.Bench, unit.State)).Select(unit => new CutOffHealth(unit.Bench, unit.State.Position, unit.State.Utc, unit.State.Why))],
            [.. dispatch.ServiceAlerts.Where(alert => alert.IsOpen)],
            problems);
    }
}
