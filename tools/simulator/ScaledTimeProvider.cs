namespace Lampwarden.Simulator;

/// <summary>Time that runs a fixed number of times faster than life: a rehearsal's clock. Timers of the system still tick in milliseconds.</summary>
/// <param name="speed">Above 0; 1 is life.</param>
public sealed class ScaledTimeProvider(double speed) : TimeProvider
{
    private readonly long _startTicks = System.GetTimestamp();
    private readonly DateTimeOffset _startUtc = System.GetUtcNow();

    /// <summary>How many of our seconds pass in one of the world's.</summary>
    public double Speed => speed;

    /// <inheritdoc/>
    public override long TimestampFrequency => TimeSpan.TicksPerSecond;

    /// <inheritdoc/>
    public override long GetTimestamp() => (long)(System.GetElapsedTime(_startTicks).Ticks * speed);

    /// <inheritdoc/>
    public override DateTimeOffset GetUtcNow() => _startUtc.AddTicks(GetTimestamp());

    /// <inheritdoc/>
    public override ITimer CreateTimer(TimerCallback callback, object? state, TimeSpan dueTime, TimeSpan period) =>
        System.CreateTimer(callback, state, Shrink(dueTime), Shrink(period));

    private TimeSpan Shrink(TimeSpan time) => time == Timeout.InfiniteTimeSpan || time == TimeSpan.Zero
        ? time
        : TimeSpan.FromTicks(Math.Max(TimeSpan.TicksPerMillisecond, (long)(time.Ticks / speed)));
}
