using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;

namespace Lampwarden.Host.Tests.Alerting.Routes;

/// <summary>Changes for tests, and a route that does what the test says.</summary>
internal static class Told
{
    public static readonly DateTimeOffset Utc = new(2026, 4, 2, 3, 4, 5, TimeSpan.Zero);

    public static AlertChange Change(int number = 1, Severity severity = Severity.Critical, string what = AlertSteps.Raised, string bench = "bay-3", int repeats = 0, AlertState state = AlertState.Unacknowledged) =>
        new(12, what, new Alert(bench, number, "hard-short", severity, state, 12, "The line current is that of a short.") { Standing = true, Repeats = repeats }) { Utc = Utc };
}

/// <summary>A route whose every attempt is decided by the test.</summary>
internal sealed class ScriptedRoute(Func<AlertChange, CancellationToken, Task> attempt, string name = "scripted") : IAlertRoute
{
    private readonly Lock _gate = new();
    private readonly List<AlertChange> _told = [];

    public string Name => name;

    public int Attempts { get; private set; }

    public IReadOnlyList<AlertChange> Told
    {
        get
        {
            lock (_gate)
            {
                return [.. _told];
            }
        }
    }

    public static ScriptedRoute Working(string name = "scripted") => new((_, _) => Task.CompletedTask, name);

    public static ScriptedRoute Dead(string name = "dead") => new((_, _) => throw new Host.Alerting.Routes.RouteException("no answer"), name);

    public async Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        lock (_gate)
        {
            Attempts++;
        }

        await attempt(change, cancellation);
        lock (_gate)
        {
            _told.Add(change);
        }
    }
}
