namespace Lampwarden.Acquisition;

/// <summary>How a meter is doing: a snapshot taken when asked for. Everything counted since the session began.</summary>
public sealed record MeterHealth
{
    /// <summary>The answer to *IDN?, or null where none was asked or given.</summary>
    public string? Identity { get; init; }

    /// <summary>The wire is open at this moment.</summary>
    public bool Connected { get; init; }

    /// <summary>How often the wire was opened.</summary>
    public int Openings { get; init; }

    /// <summary>Readings given.</summary>
    public long Readings { get; init; }

    /// <summary>Overloads given.</summary>
    public long Overloads { get; init; }

    /// <summary>Gaps given, by reason.</summary>
    public IReadOnlyDictionary<GapReason, long> Gaps { get; init; } = new Dictionary<GapReason, long>();

    /// <summary>Lines that came from the meter: always <see cref="LinesUsed"/> + <see cref="LinesPassedOver"/> + the sum of <see cref="LinesRefused"/>.</summary>
    public long LinesReceived { get; init; }

    /// <summary>Lines that became a reading or an overload.</summary>
    public long LinesUsed { get; init; }

    /// <summary>Lines that were no readings and not meant to be: identity, error queue, echoes of commands.</summary>
    public long LinesPassedOver { get; init; }

    /// <summary>Lines thrown away, by reason.</summary>
    public IReadOnlyDictionary<GapReason, long> LinesRefused { get; init; } = new Dictionary<GapReason, long>();

    /// <summary>Polls of the schedule that were left out because the one before took too long.</summary>
    public long SkippedPolls { get; init; }

    /// <summary>Readings a second over the last 64 intervals between neighbouring readings; NaN before two.</summary>
    public double RatePerSecond { get; init; } = double.NaN;

    /// <summary>Standard deviation of those intervals in seconds; NaN before three readings.</summary>
    public double JitterSeconds { get; init; } = double.NaN;

    /// <summary>Mean time from question to answer over the last 64 readings, in seconds; NaN before one.</summary>
    public double LatencySeconds { get; init; } = double.NaN;

    /// <summary>Longest time from question to answer since the session began, in seconds; NaN before one reading.</summary>
    public double LongestLatencySeconds { get; init; } = double.NaN;

    /// <summary>How many readings in a row have been the same to the last digit, the newest included. A held display shows no noise.</summary>
    public long SameReadings { get; init; }

    /// <summary>How often the wall clock jumped by more than half a second against the monotonic clock.</summary>
    public int ClockSteps { get; init; }

    /// <summary>How far the wall clock has moved against the monotonic clock since the session began, in seconds; steps included.</summary>
    public double WallClockOffsetSeconds { get; init; }

    /// <summary>What a person should know, newest last, each once; at most 20.</summary>
    public IReadOnlyList<string> Problems { get; init; } = [];
}
