using System.Threading.Channels;
using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition;

/// <summary>
/// The one place where events are numbered, stamped, counted and handed on. Thread-safe.
/// What the channel cannot take at once waits here, at most one read's worth of lines, until <see cref="FlushAsync"/>;
/// nothing is dropped.
/// </summary>
internal sealed class EventOutlet
{
    private readonly Lock _gate = new();
    private readonly Queue<MeterEvent> _waiting = new();
    private readonly Channel<MeterEvent> _channel = Channel.CreateBounded<MeterEvent>(
        new BoundedChannelOptions(1024) { SingleReader = true, FullMode = BoundedChannelFullMode.Wait });

    private readonly double _windowSeconds;
    private long _sequence;
    private bool _completed;

    public EventOutlet(SessionClock clock, HealthBook health, double windowSeconds)
    {
        Clock = clock;
        Health = health;
        _windowSeconds = windowSeconds;
    }

    public SessionClock Clock { get; }

    public HealthBook Health { get; }

    public ChannelReader<MeterEvent> Reader => _channel.Reader;

    /// <summary>A reading or an overload out of a line that arrived.</summary>
    /// <param name="value">What it said.</param>
    /// <param name="firstByteStamp">When it began.</param>
    /// <param name="latencySeconds">From the question, or its beginning, to its end.</param>
    /// <param name="countLine">The line is not counted yet: count it with the event.</param>
    public void Value(in MeterValue value, long firstByteStamp, double latencySeconds, bool countLine = false)
    {
        var utc = Clock.Utc(firstByteStamp);
        lock (_gate)
        {
            Emit(new MeterEvent(value.Kind, _sequence++, value.Value, utc, Clock.ElapsedSeconds(firstByteStamp), latencySeconds,
                Detail: value.Detail, Digits: value.Digits, WindowSeconds: _windowSeconds), countLine);
        }
    }

    /// <summary>A gap ending now.</summary>
    public void Gap(GapReason reason, string detail)
    {
        var now = Clock.Now;
        var utc = Clock.Utc(now);
        lock (_gate)
        {
            Emit(new MeterEvent(MeterEventKind.Gap, _sequence++, double.NaN, utc, Clock.ElapsedSeconds(now), Reason: reason, Detail: detail));
        }
    }

    /// <summary>Waits until everything given so far lies in the channel.</summary>
    public ValueTask FlushAsync(CancellationToken cancellationToken)
    {
        lock (_gate)
        {
            if (_waiting.Count == 0)
            {
                return ValueTask.CompletedTask;
            }
        }

        return FlushWaitingAsync(cancellationToken);
    }

    private async ValueTask FlushWaitingAsync(CancellationToken cancellationToken)
    {
        while (await _channel.Writer.WaitToWriteAsync(cancellationToken))
        {
            lock (_gate)
            {
                while (_waiting.TryPeek(out var one) && _channel.Writer.TryWrite(one))
                {
                    _waiting.Dequeue();
                }

                if (_waiting.Count == 0)
                {
                    return;
                }
            }
        }
    }

    /// <summary>Nothing more will come: because of a fault of ours, or null at a normal end.</summary>
    public void Complete(Exception? fault)
    {
        lock (_gate)
        {
            _completed = true;
            _channel.Writer.TryComplete(fault);
        }
    }

    private void Emit(in MeterEvent one, bool countLine = false)
    {
        if (_completed)
        {
            return;
        }

        Health.Event(one, countLine);
        if (_waiting.Count > 0 || !_channel.Writer.TryWrite(one))
        {
            _waiting.Enqueue(one);
        }
    }
}
