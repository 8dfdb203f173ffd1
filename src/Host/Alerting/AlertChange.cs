using System.Text.Json.Serialization;

namespace Lampwarden.Host.Alerting;

/// <summary>One step in an alert's life, stored before it is told.</summary>
/// <param name="Seconds">When, in seconds of the run.</param>
/// <param name="What">One of <see cref="AlertSteps"/>.</param>
/// <param name="Alert">The alert after the step.</param>
public sealed record AlertChange(double Seconds, string What, Alert Alert)
{
    /// <summary>Wall time of the step; set where it is handed on to be told.</summary>
    public DateTimeOffset Utc { get; init; }

    /// <summary>Who did it; null for the watch itself.</summary>
    public string? By { get; init; }

    /// <summary>Why, in a person's words; for shelving and resetting.</summary>
    public string? Reason { get; init; }

    /// <summary>For <see cref="AlertSteps.Grouped"/>: the changes told as one message, in order.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public IReadOnlyList<AlertChange>? Group { get; init; }
}

/// <summary>What can happen to an alert. The written names are contract.</summary>
public static class AlertSteps
{
    /// <summary>The condition came, or came back.</summary>
    public const string Raised = "raised";

    /// <summary>It grew worse, or its cause is now seen as another.</summary>
    public const string Amended = "amended";

    /// <summary>The condition went away.</summary>
    public const string Returned = "returned";

    /// <summary>A person knows.</summary>
    public const string Acknowledged = "acknowledged";

    /// <summary>A person put it aside for a time.</summary>
    public const string Shelved = "shelved";

    /// <summary>It came back from the shelf.</summary>
    public const string Unshelved = "unshelved";

    /// <summary>A person released a latched alert.</summary>
    public const string Reset = "reset";

    /// <summary>Its run had ended, and now the bench's next soak begins.</summary>
    public const string Closed = "closed";

    /// <summary>It was open when the service was left off, and the service is back. Told to whoever keeps the state of a bench.</summary>
    public const string CarriedOn = "carried-on";

    /// <summary>It is told again because nobody acknowledged it.</summary>
    public const string Repeated = "repeated";

    /// <summary>Several changes told as one message.</summary>
    public const string Grouped = "grouped";

    /// <summary>A person tries out a route.</summary>
    public const string Test = "test";
}
