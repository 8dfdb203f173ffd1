using System.Threading.Channels;
using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition;

/// <summary>
/// The one place where events are numbered, stamped, counted and handed on. Thread-safe.
/// Events wait here, at most one read's worth of lines, until <see cref="FlushAsync"/> hands them on together: in a flood the consumer
/// is then woken once for a read and not once for a line. Nothing is dropped.
/// </summary>
internal sealed class EventOutlet
{
    private readonly Lock _gate = new();
    private readonly List<MeterEvent> _waiting = [];
    private readonly Channel<MeterEvent[]> _channel = Channel.CreateBounded<MeterEvent[]>(
        new BoundedChannelOptions(256) { SingleReader = true, FullMode = BoundedChannelFullMode.Wait });

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

    /// <summary>What was handed on, in order; never an empty one.</summary>
    public ChannelReader<MeterEvent[]> Reader => _channel.Reader;

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

    /// <summary>Hands on what was given so far; waits while the consumer is behind.</summary>
    public ValueTask FlushAsync(CancellationToken cancellationToken)
    {
        lock (_gate)
        {
            return HandOn() ? ValueTask.CompletedTask : FlushWaitingAsync(cancellationToken);
        }
    }

    private async ValueTask FlushWaitingAsync(CancellationToken cancellationToken)
    {
        while (await _channel.Writer.WaitToWriteAsync(cancellationToken))
        {
            lock (_gate)
            {
                if (HandOn())
                {
                    return;
                }
            }
        }
    }

    private bool HandOn()
    {
        if (_waiting.Count > 0 && _channel.Writer.TryWrite([.. _waiting]))
        {
            _waiting.Clear();
        }

        return _waiting.Count == 0;
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
        _waiting.Add(one);
    }
}
