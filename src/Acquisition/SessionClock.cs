namespace Lampwarden.Acquisition;

/// <summary>
/// Two clocks side by side: the monotonic one gives every interval, the wall clock only names the instant.
/// A wall clock that is slewed is followed; one that jumps is followed too, and the jump is told.
/// </summary>
internal sealed class SessionClock
{
    private const double StepSeconds = 0.5;
    private const double SureSeconds = 0.05; // both clocks were read within this, else the comparison says nothing
    private readonly TimeProvider _time;
    private readonly long _origin;
    private readonly HealthBook _health;
    private readonly Lock _gate = new();
    private readonly double _firstOffset;
    private double _lastOffset;
    private long _lastStamp = long.MinValue;
    private DateTimeOffset _lastUtc;

    public SessionClock(TimeProvider time, long origin, HealthBook health)
    {
        _time = time;
        _origin = origin;
        _health = health;
        _lastOffset = _firstOffset = Offset(time.GetUtcNow(), time.GetTimestamp());
    }

    public TimeProvider Time => _time;

    public long Now => _time.GetTimestamp();

    /// <summary>Seconds on the monotonic clock from the session's origin to a time stamp.</summary>
    public double ElapsedSeconds(long stamp) => _time.GetElapsedTime(_origin, stamp).TotalSeconds;

    /// <summary>Seconds on the monotonic clock between two time stamps.</summary>
    public double Seconds(long from, long to) => _time.GetElapsedTime(from, to).TotalSeconds;

    /// <summary>Wall time of a recent monotonic time stamp.</summary>
    public DateTimeOffset Utc(long stamp)
    {
        lock (_gate)
        {
            if (stamp == _lastStamp)
            {
                return _lastUtc; // the lines of one chunk came at one instant: three looks at a clock for each would cost as much as reading it
            }
        }

        var before = _time.GetTimestamp();
        var utc = _time.GetUtcNow();
        var after = _time.GetTimestamp();
        if (Seconds(before, after) < SureSeconds)
        {
            Compare(utc, before);
        }

        var named = utc - _time.GetElapsedTime(stamp, before);
        lock (_gate)
        {
            (_lastStamp, _lastUtc) = (stamp, named);
        }

        return named;
    }

    private void Compare(DateTimeOffset utc, long stamp)
    {
        var offset = Offset(utc, stamp);
        lock (_gate)
        {
            var change = offset - _lastOffset;
            var stepped = Math.Abs(change) > StepSeconds;
            _lastOffset = offset;
            if (stepped)
            {
                _health.Problem(FormattableString.Invariant(
                    $"the wall clock jumped by {change:+0.0;-0.0} s at {utc:yyyy-MM-ddTHH:mm:ssZ} (set, or the computer slept); intervals come from the monotonic clock and stay right."));
            }

            _health.Clock(offset - _firstOffset, stepped);
        }
    }

    private double Offset(DateTimeOffset utc, long stamp) =>
        (utc - DateTimeOffset.UnixEpoch).TotalSeconds - _time.GetElapsedTime(_origin, stamp).TotalSeconds;
}
