namespace Lampwarden.Acquisition;

/// <summary>
/// Fixed points in time at a given rate, counted from one origin, so that lateness never adds up. After a delay the points that
/// have passed are left out, never made up for in a bunch.
/// </summary>
internal sealed class PollSchedule
{
    private readonly TimeProvider _time;
    private readonly double _period; // seconds
    private readonly long _origin;
    private long _next;

    public PollSchedule(TimeProvider time, double pollsPerSecond)
    {
        _time = time;
        _period = 1 / pollsPerSecond;
        _origin = time.GetTimestamp();
    }

    /// <summary>Seconds between two points.</summary>
    public double PeriodSeconds => _period;

    /// <summary>Points left out because the poll before was still running; set by <see cref="WaitAsync"/>.</summary>
    public long SkippedByWork { get; private set; }

    /// <summary>Waits for the next point.</summary>
    /// <returns>How many seconds after that point the wait came back.</returns>
    public async ValueTask<double> WaitAsync(CancellationToken cancellationToken)
    {
        var passed = (long)Math.Ceiling((Elapsed() / _period) - 0.01); // a hundredth of a period early counts as on time
        SkippedByWork = Math.Max(0, passed - _next);
        var point = Math.Max(_next, passed);
        _next = point + 1;
        var due = point * _period;
        while (due - Elapsed() is var remaining && remaining > 0)
        {
            // Timers count whole milliseconds and may come back a little early: ask again until the point has come.
            await Task.Delay(TimeSpan.FromSeconds(Math.Max(remaining, 0.001)), _time, cancellationToken);
        }

        cancellationToken.ThrowIfCancellationRequested();
        return Elapsed() - due;
    }

    private double Elapsed() => _time.GetElapsedTime(_origin).TotalSeconds;
}
