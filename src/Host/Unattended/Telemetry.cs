using System.Diagnostics.Metrics;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// The watcher's own figures as OpenTelemetry metrics (System.Diagnostics.Metrics). Names and units are contract:
/// docs/alerts.md lists them. Counts balance there: polls = readings + overloads + gaps; accepted = stored + waiting.
/// </summary>
public sealed class Telemetry : ISoakListener, IDisposable
{
    /// <summary>Name of the meter, for collectors.</summary>
    public const string MeterName = "Lampwarden";

    private readonly Meter _meter;
    private readonly Counter<long> _polls;
    private readonly Counter<long> _findings;
    private readonly Counter<long> _alerts;
    private readonly Histogram<double> _handling;
    private readonly TimeProvider _time;

    /// <summary>Registers the instruments.</summary>
    /// <param name="pulse">Seconds since a bench was last handled.</param>
    /// <param name="store">The store's counts.</param>
    /// <param name="dispatch">The routes' counts.</param>
    /// <param name="time">Clock of the readings' stamps.</param>
    public Telemetry(Pulse pulse, Func<StoreHealth> store, AlertDispatch dispatch, IReadOnlyList<string> benches, TimeProvider time)
    {
        _time = time;
        _meter = new Meter(MeterName);
        _polls = _meter.CreateCounter<long>("lampwarden.polls", "{poll}", "Polls of line meters, by bench and result (reading, overload, gap).");
        _findings = _meter.CreateCounter<long>("lampwarden.finding.changes", "{change}", "Changes of findings, by bench, signature and kind.");
        _alerts = _meter.CreateCounter<long>("lampwarden.alert.changes", "{change}", "Changes of alerts, by bench, cause, severity and step.");
        _handling = _meter.CreateHistogram<double>("lampwarden.reading.handling", "s", "From a reading's arrival to its handling.", null,
            new InstrumentAdvice<double> { HistogramBucketBoundaries = [0.001, 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 5] });
        _meter.CreateObservableGauge("lampwarden.bench.silence", () => benches.Where(bench => pulse.SecondsSince(bench) is not null)
            .Select(bench => new Measurement<double>(pulse.SecondsSince(bench) ?? 0, Tag("bench", bench))), "s", "Since a bench's loop last handled a reading.");
        _meter.CreateObservableCounter("lampwarden.store.accepted", () => store().Accepted, "{entry}", "Entries taken by the store.");
        _meter.CreateObservableCounter("lampwarden.store.stored", () => store().Stored, "{entry}", "Entries on disk.");
        _meter.CreateObservableCounter("lampwarden.store.refused", () => store().Refused, "{entry}", "Entries lost.");
        _meter.CreateObservableGauge("lampwarden.store.waiting", () => store().Waiting, "{entry}", "Entries in the store's queue.");
        Routes(dispatch, "lampwarden.route.told", "Changes told.", route => route.Told);
        Routes(dispatch, "lampwarden.route.given_up", "Changes that could not be told.", route => route.GivenUp);
        Routes(dispatch, "lampwarden.route.dropped", "Changes that found the route's queue full.", route => route.Dropped);
        _meter.CreateObservableGauge("lampwarden.route.waiting", () => dispatch.Health.Select(route => new Measurement<long>(route.Waiting, Tag("route", route.Name))), "{change}", "Changes waiting.");
        _meter.CreateObservableGauge("lampwarden.route.up", () => dispatch.Health.Select(route => new Measurement<int>(route.State == RouteState.Down ? 0 : 1, Tag("route", route.Name))), "1", "0 while a route is down.");
    }

    /// <summary>Where metrics are sent at a collector: the given path, or for a bare address the one of the OTLP specification.</summary>
    public static Uri CollectorPath(string url) => new Uri(url) is var at && at.AbsolutePath == "/" ? new Uri(at, "/v1/metrics") : at;

    /// <inheritdoc/>
    public void Hear(SoakEvent happened)
    {
        var bench = Tag("bench", happened.Bench);
        switch (happened)
        {
            case Observed observed:
                var result = observed.Observation.IsGap ? "gap" : observed.Observation.IsOverload ? "overload" : "reading";
                _polls.Add(1, bench, Tag("result", result));
                if (observed.Utc != default)
                {
                    _handling.Record(Math.Max(0, (_time.GetUtcNow() - observed.Utc).TotalSeconds));
                }

                break;
            case FindingChanged found:
                _findings.Add(1, bench, Tag("signature", found.Change.Finding.Signature.Text()), Tag("kind", found.Change.Kind.ToString().ToLowerInvariant()));
                break;
            case AlertChanged alert:
                _alerts.Add(1, bench, Tag("cause", alert.Change.Alert.Cause), Tag("severity", alert.Change.Alert.Severity.Text()), Tag("step", alert.Change.What));
                break;
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _meter.Dispose();

    private void Routes(AlertDispatch dispatch, string name, string about, Func<RouteHealth, long> count) =>
        _meter.CreateObservableCounter(name, () => dispatch.Health.Select(route => new Measurement<long>(count(route), Tag("route", route.Name))), "{change}", about);

    private static KeyValuePair<string, object?> Tag(string key, string value) => new(key, value);
}
