namespace Lampwarden.Acquisition;

/// <summary>
/// Fixed points in time at a given rate, counted from one origin, so that lateness never adds up. After a delay the points that
/// have passed are left out, never made up for in a bunch. In a hurry the points between are used too, as close as the meter allows.
/// Owned by the task that polls; only <see cref="HurryFor"/> is called from elsewhere.
/// </summary>
internal sealed class PollSchedule
{
    private const double ShortestSeconds = 0.01; // 100 polls a second is the most a configuration may ask for
    private readonly TimeProvider _time;
    private readonly long _origin;
    private double _lastSeconds = double.NegativeInfinity;
    private long _next;
    private double _hurryUntil = double.NegativeInfinity;

    public PollSchedule(TimeProvider time, double pollsPerSecond)
    {
        _time = time;
        PeriodSeconds = 1 / pollsPerSecond;
        _origin = time.GetTimestamp();
    }

    /// <summary>Seconds between two points.</summary>
    public double PeriodSeconds { get; }

    /// <summary>Seconds from now to the next poll; negative when it is late.</summary>
    public double SecondsToNext
    {
        get
        {
            var now = Now;
            var due = _next * PeriodSeconds;
            return (now < Volatile.Read(ref _hurryUntil) ? Math.Min(due, _lastSeconds + ShortestSeconds) : due) - now;
        }
    }

    private double Now => _time.GetElapsedTime(_origin).TotalSeconds;

    /// <summary>From now on polls follow each other as fast as the meter answers, for so long.</summary>
    public void HurryFor(TimeSpan time) => Volatile.Write(ref _hurryUntil, Now + time.TotalSeconds);

    /// <summary>A poll begins now.</summary>
    /// <returns>How many seconds after its point.</returns>
    public double Begin()
    {
        var now = Now;
        _lastSeconds = now;
        return Math.Max(0, -SecondsToNext);
    }

    /// <summary>The poll is over: takes the next point, leaving out those that have passed.</summary>
    /// <returns>How many were left out.</returns>
    public long End()
    {
        // A point up to a hundredth of a period ago counts as ahead: timers are not that exact.
        var ahead = (long)Math.Ceiling((Now / PeriodSeconds) - 0.01);
        var following = _lastSeconds < (_next - 0.01) * PeriodSeconds ? _next : _next + 1; // a hurried poll uses no point up
        _next = Math.Max(following, ahead);
        return _next - following;
    }
}
