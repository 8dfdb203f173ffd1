using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting;

/// <summary>States of an alarm after IEC 62682 (the set as its public summaries give it).</summary>
public enum AlertState
{
    /// <summary>The condition stands and nobody has acknowledged it.</summary>
    Unacknowledged,

    /// <summary>The condition stands and somebody knows.</summary>
    Acknowledged,

    /// <summary>The condition went away before anybody acknowledged it.</summary>
    ReturnedUnacknowledged,

    /// <summary>Gone and known: nothing left to do.</summary>
    Normal,
}

/// <summary>One alert: a finding that asks a person to act.</summary>
/// <param name="Bench">Where.</param>
/// <param name="FindingNumber">The finding it stands for.</param>
/// <param name="Signature">Its class as last settled.</param>
/// <param name="Severity">How soon somebody has to look.</param>
/// <param name="State">Where it is in its life.</param>
/// <param name="RaisedSeconds">When it was raised, in seconds of the run.</param>
/// <param name="Text">What to tell: one sentence.</param>
public sealed record Alert(
    string Bench,
    int FindingNumber,
    Signature Signature,
    Severity Severity,
    AlertState State,
    double RaisedSeconds,
    string Text);

/// <summary>One step in an alert's life, stored before it is told.</summary>
/// <param name="Seconds">When, in seconds of the run.</param>
/// <param name="What">raised, amended, returned or acknowledged.</param>
/// <param name="Alert">The alert after the step.</param>
public sealed record AlertChange(double Seconds, string What, Alert Alert);
