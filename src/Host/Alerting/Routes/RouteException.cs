namespace Lampwarden.Host.Alerting.Routes;

/// <summary>A route could not tell a change this time; trying again may help.</summary>
public class RouteException(string message, Exception? inner = null) : Exception(message, inner)
{
    /// <summary>How long the other side asked us to wait; null where it did not.</summary>
    public TimeSpan? RetryAfter { get; init; }
}

/// <summary>The other side will not take this message, now or later: a wrong address, a wrong secret.</summary>
public sealed class RouteRefusedException(string message, Exception? inner = null) : RouteException(message, inner);
