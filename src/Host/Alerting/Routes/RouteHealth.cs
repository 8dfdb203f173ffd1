namespace Lampwarden.Host.Alerting.Routes;

/// <summary>How a route does.</summary>
public enum RouteState
{
    /// <summary>The last message was told, or none had to be yet.</summary>
    Working,

    /// <summary>The last attempt failed; it is tried again.</summary>
    Failing,

    /// <summary>It has failed for long, or gave a message up: the other routes were told.</summary>
    Down,
}

/// <summary>A route's own health. Counts balance: taken = told + given up + dropped + waiting.</summary>
/// <param name="Taken">Changes handed to it.</param>
/// <param name="Told">Changes it told, in messages of one or several.</param>
/// <param name="GivenUp">Changes it could not tell in time, or that were refused.</param>
/// <param name="Dropped">Changes that found its queue full.</param>
/// <param name="Waiting">Changes in its queue or being told.</param>
/// <param name="LastToldUtc">Null while none was.</param>
/// <param name="LastError">Null while there was none since the last success.</param>
/// <param name="InFlood">Whether so much comes that it is told in groups.</param>
public sealed record RouteHealth(
    string Name,
    string Kind,
    RouteState State,
    long Taken,
    long Told,
    long GivenUp,
    long Dropped,
    long Waiting,
    DateTimeOffset? LastToldUtc,
    string? LastError,
    bool InFlood);
