using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting.Routes;

namespace Lampwarden.Host.Alerting;

/// <summary>What people and other parts of the service do with the dispatch.</summary>
public sealed partial class AlertDispatch
{
    /// <summary>Says that something is wrong with the watcher itself.</summary>
    /// <param name="cause">One of <see cref="AlertCauses"/>.</param>
    /// <param name="severity">How soon somebody has to look.</param>
    /// <param name="text">What to tell; begins with the subject in quotes where there can be several.</param>
    public void Raise(string cause, Severity severity, string text)
    {
        lock (_gate)
        {
            Publish(_book.Raise(cause, severity, text, Seconds));
        }
    }

    /// <summary>Says that it is well again.</summary>
    /// <param name="cause">As raised.</param>
    /// <param name="startOfText">As the text began.</param>
    public void Clear(string cause, string startOfText = "")
    {
        lock (_gate)
        {
            Publish(_book.Clear(cause, Seconds, startOfText));
        }
    }

    /// <summary>A person has seen an alert of the watcher itself.</summary>
    /// <returns>False where there is nothing to acknowledge.</returns>
    public bool Acknowledge(int number, string? by) => Do(book => book.Acknowledge(number, Seconds, by));

    /// <summary>A person puts an alert of the watcher itself aside for a time.</summary>
    public bool Shelve(int number, TimeSpan time, string? by, string? reason) =>
        Do(book => book.Shelve(number, time.TotalSeconds, Seconds, by, reason));

    /// <summary>A person releases a latched alert of the watcher itself.</summary>
    public bool Reset(int number, string? by, string? reason) => Do(book => book.Reset(number, Seconds, by, reason));

    /// <summary>Waits for routes that keep a connection to have one, at most so long.</summary>
    public Task WaitForConnectionsAsync(TimeSpan longest, CancellationToken cancellation) =>
        Task.WhenAll(_routes.Select(route => route.WaitForConnectionAsync(longest, cancellation)));

    /// <summary>Tries every route, or the named one, with a message marked as a test.</summary>
    /// <returns>For each: its name, and what went wrong; null for nothing.</returns>
    public Task<RouteTrial[]> TryAsync(string? route, CancellationToken cancellation)
    {
        var change = TestChange(_time.GetUtcNow());
        return Task.WhenAll(_routes.Where(one => route is null || one.Name == route).Select(async one =>
        {
            var start = _time.GetTimestamp();
            try
            {
                await one.TryAsync(change, cancellation);
                return new RouteTrial(one.Name, one.Settings.Kind, true, null, _time.GetElapsedTime(start).TotalSeconds);
            }
            catch (RouteException error)
            {
                return new RouteTrial(one.Name, one.Settings.Kind, false, error.Message, _time.GetElapsedTime(start).TotalSeconds);
            }
        }));
    }

    private static AlertChange TestChange(DateTimeOffset utc) => new(0, AlertSteps.Test, new Alert(
        Alert.ServiceBench, 0, AlertCauses.Test, Severity.Warning, AlertState.Normal, 0, "A person tries out this route. Nothing is wrong."))
    {
        Utc = utc,
    };

    private bool Do(Func<AlertBook, AlertChange?> what)
    {
        lock (_gate)
        {
            var change = what(_book);
            Publish(change);
            return change is not null;
        }
    }
}
