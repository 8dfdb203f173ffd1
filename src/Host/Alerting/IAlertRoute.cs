namespace Lampwarden.Host.Alerting;

/// <summary>A way to reach a person. A route is slow or broken alone: it never holds back the watch or another route.</summary>
public interface IAlertRoute
{
    /// <summary>Name in messages.</summary>
    string Name { get; }

    /// <summary>Tells one change, already stored.</summary>
    Task TellAsync(AlertChange change, CancellationToken cancellation);
}
