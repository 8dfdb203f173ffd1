using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>How a route is used, whatever it is made of.</summary>
public sealed record RouteSettings
{
    /// <summary>webhook, mail, mqtt, command.</summary>
    public string Kind { get; init; } = "";

    /// <summary>Alerts below it are not told here.</summary>
    public Severity Minimum { get; init; } = Severity.Warning;

    /// <summary>0: at once; n: from the n-th repeat of an alert on.</summary>
    public int AfterRepeats { get; init; }

    /// <summary>How long one attempt may take.</summary>
    public TimeSpan Attempt { get; init; } = TimeSpan.FromSeconds(10);

    /// <summary>How long one message is tried.</summary>
    public TimeSpan GiveUp { get; init; } = TimeSpan.FromMinutes(30);

    /// <summary>How long it may fail before it counts as down.</summary>
    public TimeSpan DownAfter { get; init; } = TimeSpan.FromMinutes(1);

    /// <summary>Messages in any minute.</summary>
    public int AtMostPerMinute { get; init; } = 20;

    /// <summary>False for machines, which want each change alone.</summary>
    public bool Groups { get; init; } = true;

    /// <summary>What is still waiting when the service ends gets this long.</summary>
    public TimeSpan LastChance { get; init; } = TimeSpan.FromSeconds(3);

    /// <summary>Changes that may wait.</summary>
    public int QueueLength { get; init; } = 1000;
}
