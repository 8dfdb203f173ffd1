using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;

namespace Lampwarden.Host.Soaking;

/// <summary>Something that happened on a bench, for whoever looks on: the page, the rehearsal's narrator, a test.</summary>
/// <param name="Bench">Where.</param>
public abstract record SoakEvent(string Bench);

/// <summary>A meter answered for the first time, or again after a gap.</summary>
public sealed record MeterFound(string Bench, string Meter, string? Identity) : SoakEvent(Bench);

/// <summary>A meter stopped giving readings; told once a gap.</summary>
public sealed record MeterLost(string Bench, string Meter, string Reason, string? Detail) : SoakEvent(Bench);

/// <summary>The soak waits for current.</summary>
public sealed record WaitingForSwitchOn(string Bench, double LineAmps) : SoakEvent(Bench);

/// <summary>A run began.</summary>
public sealed record RunBegan(string Bench, string Run, BenchPlan Plan, DateTimeOffset Utc) : SoakEvent(Bench);

/// <summary>One observation was recorded and weighed.</summary>
/// <param name="Bench">Where.</param>
/// <param name="Observation">What the meters showed.</param>
/// <param name="Phase">How far the watch has come.</param>
/// <param name="Sentence">What the watch thinks; to be asked for only while this event is heard, and not at every reading.</param>
public sealed record Observed(string Bench, Observation Observation, WatchPhase Phase, Func<string> Sentence) : SoakEvent(Bench)
{
    /// <summary>When the reading's first byte arrived.</summary>
    public DateTimeOffset Utc { get; init; }
}

/// <summary>A finding was raised, amended or cleared.</summary>
public sealed record FindingChanged(string Bench, double Seconds, FindingChange Change) : SoakEvent(Bench);

/// <summary>An alert changed its state; already handed to the store.</summary>
public sealed record AlertChanged(string Bench, AlertChange Change) : SoakEvent(Bench);

/// <summary>The run is closed and stored.</summary>
public sealed record RunEnded(string Bench, double Seconds, SoakDocument Document, Judgement Judgement) : SoakEvent(Bench);

/// <summary>What soaks there, or behind which lamps, is another than before.</summary>
public sealed record PlanChanged(string Bench, BenchPlan Plan) : SoakEvent(Bench);

/// <summary>A bring-up took a step, or asks for something else.</summary>
public sealed record BringUpMoved(string Bench, BringUpStatus Status) : SoakEvent(Bench);

/// <summary>What a person may do with a bench has changed.</summary>
/// <param name="Bench">Where.</param>
/// <param name="Idle">No soak is under way, and none waits.</param>
/// <param name="CanStart">A soak can be started.</param>
/// <param name="CanEnd">The soak can be ended.</param>
public sealed record DeskChanged(string Bench, bool Idle, bool CanStart, bool CanEnd) : SoakEvent(Bench);

/// <summary>What the meters show while nothing soaks.</summary>
public sealed record IdleLook(string Bench, double LineAmps, double MainsVolts) : SoakEvent(Bench);

/// <summary>Hears what happens on the benches. Called on the soak's own loop, so it must be quick and must not throw.</summary>
public interface ISoakListener
{
    /// <summary>Hears one event.</summary>
    void Hear(SoakEvent happened);
}
