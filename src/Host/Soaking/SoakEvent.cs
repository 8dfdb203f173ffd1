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
public sealed record Observed(string Bench, Observation Observation, WatchPhase Phase) : SoakEvent(Bench);

/// <summary>A finding was raised, amended or cleared.</summary>
public sealed record FindingChanged(string Bench, double Seconds, FindingChange Change) : SoakEvent(Bench);

/// <summary>An alert changed its state; already handed to the store.</summary>
public sealed record AlertChanged(string Bench, AlertChange Change) : SoakEvent(Bench);

/// <summary>The run is closed and stored.</summary>
public sealed record RunEnded(string Bench, double Seconds, SoakDocument Document, Judgement Judgement) : SoakEvent(Bench);

/// <summary>Hears what happens on the benches. Called on the soak's own loop, so it must be quick and must not throw.</summary>
public interface ISoakListener
{
    /// <summary>Hears one event.</summary>
    void Hear(SoakEvent happened);
}
