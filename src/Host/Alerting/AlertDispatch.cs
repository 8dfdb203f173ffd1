using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Alerting.Routes;

namespace Lampwarden.Host.Alerting;

/// <summary>
/// Decides which routes are told of a change, keeps the alerts about the watcher itself (a dead route is one), and hands
/// on at once what a dead route cannot tell. One for the whole service; thread-safe; never waits for a route.
/// </summary>
public sealed partial class AlertDispatch : IAlertRoute, IAsyncDisposable
{
    private readonly Lock _gate = new();
    private readonly TimeProvider _time;
    private readonly ILogger _logger;
    private readonly ServiceAlertLog? _log;
    private readonly AlertBook _book;
    private readonly long _start;
    private readonly HashSet<(string Route, string Bench, int Alert)> _told = [];
    private readonly ITimer _timer;
    private IReadOnlyList<RouteRunner> _routes = [];

    /// <summary>Prepares the dispatch; routes come with <see cref="Use"/>.</summary>
    /// <param name="rules">How alerts live.</param>
    /// <param name="log">Where the watcher's own alerts are stored; null for nowhere (a test of routes).</param>
    /// <param name="time">Clock of repeats and stamps.</param>
    /// <param name="logger">For structured events.</param>
    public AlertDispatch(AlertRules rules, ServiceAlertLog? log, TimeProvider time, ILogger logger)
    {
        (_log, _time, _logger, _start) = (log, time, logger, time.GetTimestamp());
        // The routes' own rules say when one is down and when it works again: no further delay.
        _book = new AlertBook(Alert.ServiceBench, rules with { OnDelaySeconds = 0, OffDelaySeconds = 0 });
        _timer = time.CreateTimer(_ => Tick(), null, TimeSpan.FromSeconds(1), TimeSpan.FromSeconds(1));
    }

    /// <inheritdoc/>
    public string Name => "routes";

    /// <summary>Called with each change of an alert of the watcher itself, on any thread.</summary>
    public event Action<AlertChange>? ServiceAlertChanged;

    /// <summary>The health of every route.</summary>
    public IReadOnlyList<RouteHealth> Health => [.. _routes.Select(route => route.Health)];

    /// <summary>The alerts of the watcher itself.</summary>
    public IReadOnlyCollection<Alert> ServiceAlerts
    {
        get
        {
            lock (_gate)
            {
                return _book.Alerts;
            }
        }
    }

    /// <summary>Takes new routes into use.</summary>
    /// <param name="make">Makes them; is given what they call when they go down or work again.</param>
    /// <returns>The routes used until now, for the caller to dispose: they still tell what waits in them.</returns>
    public IReadOnlyList<RouteRunner> Use(Func<Action<RouteRunner, IReadOnlyList<AlertChange>>, IReadOnlyList<RouteRunner>> make)
    {
        lock (_gate)
        {
            var before = _routes;
            _routes = make(Turned);
            foreach (var route in before)
            {
                Publish(_book.Clear(AlertCauses.RouteDown, Seconds, Subject(route)));
            }

            return before;
        }
    }

    /// <inheritdoc/>
    public Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        lock (_gate)
        {
            Tell(change, null);
        }

        return Task.CompletedTask;
    }

    /// <inheritdoc/>
    public async ValueTask DisposeAsync()
    {
        await _timer.DisposeAsync();
        await Task.WhenAll(_routes.Select(route => route.DisposeAsync().AsTask()));
    }

    private double Seconds => _time.GetElapsedTime(_start).TotalSeconds;

    private void Tell(AlertChange change, RouteRunner? except)
    {
        // Where a route that should tell at once is dead, those that would wait for repeats are told in its place.
        var stepIn = change.Alert.Severity == Severity.Critical
            && _routes.Any(route => route.Settings.AfterRepeats == 0 && route.Health.State == RouteState.Down);
        foreach (var route in _routes)
        {
            if (route != except && Wants(route, change, stepIn))
            {
                route.Tell(change);
            }
        }
    }

    private bool Wants(RouteRunner route, AlertChange change, bool stepIn)
    {
        var alert = change.Alert;
        var key = (route.Name, alert.Bench, alert.Number);
        if (change.What == AlertSteps.CarriedOn)
        {
            // Whoever was told by the service before hears from this one how it goes on.
            if (alert.Severity >= route.Settings.Minimum && alert.Repeats >= route.Settings.AfterRepeats)
            {
                _told.Add(key);
            }

            return !route.Settings.Groups;
        }

        var news = change.What is AlertSteps.Raised or AlertSteps.Amended or AlertSteps.Repeated or AlertSteps.Unshelved;
        if (!news)
        {
            // Whoever heard of the alert hears how it goes on, and nobody else.
            var heard = _told.Contains(key);
            if (!alert.IsOpen)
            {
                _told.Remove(key);
            }

            return heard || !route.Settings.Groups;
        }

        if (alert.Severity < route.Settings.Minimum || (alert.Repeats < route.Settings.AfterRepeats && !stepIn && route.Settings.Groups))
        {
            return false;
        }

        _told.Add(key);
        return true;
    }

    private void Turned(RouteRunner route, IReadOnlyList<AlertChange> untold)
    {
        lock (_gate)
        {
            if (route.Health.State != RouteState.Down)
            {
                Publish(_book.Clear(AlertCauses.RouteDown, Seconds, Subject(route)));
                return;
            }

            var critical = untold.Where(change => change.Alert.Severity == Severity.Critical && change.What is not AlertSteps.Test).ToList();
            Publish(_book.Raise(
                AlertCauses.RouteDown,
                critical.Count > 0 ? Severity.Critical : Severity.Warning,
                FormattableString.Invariant($"{Subject(route)} cannot tell anybody: {route.Health.LastError}. {untold.Count} changes wait, {critical.Count} of them critical."),
                Seconds), route);
            foreach (var change in critical)
            {
                foreach (var other in _routes.Where(other => other != route && !_told.Contains((other.Name, change.Alert.Bench, change.Alert.Number))))
                {
                    _told.Add((other.Name, change.Alert.Bench, change.Alert.Number));
                    other.Tell(change);
                }
            }
        }
    }

    private void Tick()
    {
        lock (_gate)
        {
            foreach (var change in _book.Tick(Seconds))
            {
                Publish(change);
            }
        }
    }

    private void Publish(AlertChange? change, RouteRunner? except = null)
    {
        if (change is null)
        {
            return;
        }

        change = change with { Utc = _time.GetUtcNow() };
        if (_log?.Append(change) is { } error)
        {
            Log.AlertNotStored(_logger, error, change.Alert.Bench, change.Alert.Number);
        }

        var alert = change.Alert;
        var news = change.What is AlertSteps.Raised or AlertSteps.Amended or AlertSteps.Repeated;
        Log.AlertTold(_logger, news ? LogLevel.Error : LogLevel.Information, alert.Bench, change.What, alert.Cause, alert.Severity.Text(), alert.Text);
        ServiceAlertChanged?.Invoke(change);
        Tell(change, except);
    }

    private static string Subject(RouteRunner route) => $"'{route.Name}'";
}
