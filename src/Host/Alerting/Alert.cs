using System.Text.Json.Serialization;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting;

/// <summary>One alert: something that asks a person to act.</summary>
/// <param name="Bench">Where; <see cref="ServiceBench"/> for the watcher itself.</param>
/// <param name="Number">Counts from 1 within a run (or within the service). A condition that comes back keeps its number.</param>
/// <param name="Cause">The signature's written name, or one of <see cref="AlertCauses"/>.</param>
/// <param name="Severity">How soon somebody has to look: the worst it has been since it was raised.</param>
/// <param name="State">Where it is in its life.</param>
/// <param name="RaisedSeconds">When it was last raised, in seconds of the run.</param>
/// <param name="Text">What to tell: one or two sentences.</param>
public sealed record Alert(
    string Bench,
    int Number,
    string Cause,
    Severity Severity,
    AlertState State,
    double RaisedSeconds,
    string Text)
{
    /// <summary>Stands in <see cref="Bench"/> for alerts about the watcher itself.</summary>
    public const string ServiceBench = "(watcher)";

    /// <summary>The finding it stands for at present; null where there is none.</summary>
    public int? FindingNumber { get; init; }

    /// <summary>Whether the condition itself stands, whatever people did about the alert.</summary>
    public bool Standing { get; init; }

    /// <summary>When a shelved alert comes back by itself, in seconds of the run.</summary>
    public double? ShelvedUntilSeconds { get; init; }

    /// <summary>How often it has been told again without an acknowledgement.</summary>
    public int Repeats { get; init; }

    /// <summary>Who acknowledged, shelved or reset it last.</summary>
    public string? By { get; init; }

    /// <summary>Whether it still asks somebody to do something.</summary>
    [JsonIgnore]
    public bool IsOpen => State != AlertState.Normal;

    /// <summary>Whether nobody has said yet that they know.</summary>
    [JsonIgnore]
    public bool IsUnacknowledged => State is AlertState.Unacknowledged or AlertState.ReturnedUnacknowledged or AlertState.LatchedUnacknowledged;
}

/// <summary>Causes of alerts that no signature names. The written names are contract.</summary>
public static class AlertCauses
{
    /// <summary>One cause came and went three or more times within a minute.</summary>
    public const string Chattering = "chattering";

    /// <summary>A way of telling people does not work.</summary>
    public const string RouteDown = "route-down";

    /// <summary>The cut-off output was opened.</summary>
    public const string CutOff = "cut-off";

    /// <summary>The cut-off output cannot be reached.</summary>
    public const string CutOffDown = "cut-off-down";

    /// <summary>The store cannot keep what is read.</summary>
    public const string StoreTrouble = "store-trouble";

    /// <summary>A bench's loop handles no readings any more.</summary>
    public const string LoopStuck = "loop-stuck";

    /// <summary>A test sent by a person.</summary>
    public const string Test = "test";
}
