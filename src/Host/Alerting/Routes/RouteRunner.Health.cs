using Polly.Retry;
using Polly.Timeout;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>What a route knows of itself. Written by its loop, read by anybody.</summary>
public sealed partial class RouteRunner
{
    private static readonly TimeSpan LongestAsked = TimeSpan.FromMinutes(5);

    private readonly Lock _gate = new();
    private RouteState _state = RouteState.Working;
    private bool _held;
    private long _taken;
    private long _told;
    private long _givenUp;
    private long _dropped;
    private int _failures;
    private long _failingSince;
    private DateTimeOffset? _lastToldUtc;
    private string? _lastError;

    /// <summary>How it does now. Safe from any thread.</summary>
    public RouteHealth Health
    {
        get
        {
            lock (_gate)
            {
                var taken = Interlocked.Read(ref _taken);
                return new RouteHealth(
                    Name, Settings.Kind, _state, taken, _told, _givenUp, _dropped, taken - _told - _givenUp - _dropped, _lastToldUtc, _lastError, _pace.Flood.InFlood);
            }
        }
    }

    private static TimeSpan? Asked(Exception? error) =>
        error is RouteException { RetryAfter: { } asked } && asked > TimeSpan.Zero ? (asked < LongestAsked ? asked : LongestAsked) : null;

    private string Explain(Exception error) => error is TimeoutRejectedException
        ? FormattableString.Invariant($"no answer within {Settings.Attempt.TotalSeconds} s")
        : error.Message;

    private void Dropped(AlertChange change)
    {
        lock (_gate)
        {
            _dropped++;
        }

        Log.AlertDropped(_logger, Name, change.Alert.Bench, change.Alert.Number, change.What);
    }

    private void Succeeded(int count)
    {
        RouteState before;
        lock (_gate)
        {
            before = _state;
            (_state, _failures, _lastError, _lastToldUtc) = (RouteState.Working, 0, null, _time.GetUtcNow());
            _told += count;
        }

        if (before == RouteState.Down)
        {
            Log.RouteWorksAgain(_logger, Name);
            _turned(this, []);
        }
    }

    private ValueTask Failed(OnRetryArguments<object> attempt)
    {
        var error = attempt.Outcome.Exception!;
        Note(error);
        Log.RouteFailing(_logger, Name, _failures, attempt.RetryDelay.TotalSeconds, Explain(error));
        if (_state != RouteState.Down && _time.GetElapsedTime(_failingSince) >= Settings.DownAfter)
        {
            Down(error);
        }

        return ValueTask.CompletedTask;
    }

    private void GaveUp(int count, Exception error)
    {
        if (error is not TimeoutRejectedException || _lastError is null)
        {
            Note(error);
        }

        var wasDown = _state == RouteState.Down;
        if (!wasDown)
        {
            Down(error is TimeoutRejectedException && _lastError is not null ? new RouteException(_lastError) : error);
        }

        lock (_gate)
        {
            _givenUp += count;
        }

        _pending.RemoveRange(0, count);
    }

    private void Note(Exception error)
    {
        lock (_gate)
        {
            if (_failures++ == 0)
            {
                _failingSince = _time.GetTimestamp();
            }

            _lastError = Explain(error);
            _state = _state == RouteState.Down ? RouteState.Down : RouteState.Failing;
        }
    }

    private void Down(Exception error)
    {
        lock (_gate)
        {
            _state = RouteState.Down;
        }

        Drain();
        Log.RouteDown(_logger, Name, _pending.Count, Explain(error));
        _turned(this, [.. _pending]);
    }
}
