namespace Lampwarden.Host.Recording.Forwarding;

/// <summary>A run of which a target has not had everything, with how far it got.</summary>
internal sealed record OutboxRun(long Key, string Id, string BenchTag, long StartedMs, bool IsEnded, OutboxCursor Cursor);

/// <summary>How much of a run a target has confirmed. Stored; entries count from the run's first.</summary>
internal readonly record struct OutboxCursor(bool Begun, long Entries, long Findings, long Alerts, bool Ended);

/// <summary>A point the server will never take, with what it said.</summary>
public sealed record ParkedPoint(string Run, DateTimeOffset Utc, string Reason, string Line);
