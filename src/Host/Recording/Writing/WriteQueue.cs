namespace Lampwarden.Host.Recording.Writing;

/// <summary>
/// Between those who offer and the one writer. Bounded: offering never waits, and what does not fit is refused and counted.
/// Entries leave only once they are on disk. Safe for any number of callers and one writer.
/// </summary>
internal sealed class WriteQueue(int capacity, int reserve)
{
    private readonly object _gate = new();
    private readonly WriteItem[] _ring = new WriteItem[capacity];
    private int _head;
    private int _count;
    private bool _hurry;
    private bool _closed;
    private long _accepted;
    private long _stored;
    private long _refused;

    public (long Accepted, long Stored, long Waiting, long Refused) Counts
    {
        get
        {
            lock (_gate)
            {
                return (_accepted, _stored, _count, _refused);
            }
        }
    }

    public bool TryAdd(in WriteItem item)
    {
        lock (_gate)
        {
            if (_closed || _count >= (item.Action is { Important: true } ? capacity : capacity - reserve))
            {
                _refused++;
                return false;
            }

            _ring[(_head + _count) % capacity] = item;
            _count++;
            _accepted++;
            if (item.Action is { Hurry: true })
            {
                _hurry = true;
                Monitor.Pulse(_gate);
            }

            return true;
        }
    }

    /// <summary>Nothing more is taken; the writer is woken to store the rest.</summary>
    public void Close()
    {
        lock (_gate)
        {
            _closed = true;
            Monitor.Pulse(_gate);
        }
    }

    /// <summary>Waits for the time, a hurry or the end, whichever is first. False once closed and empty.</summary>
    public bool Wait(TimeSpan longest)
    {
        lock (_gate)
        {
            if (!_hurry && !_closed && longest > TimeSpan.Zero)
            {
                Monitor.Wait(_gate, longest);
            }

            _hurry = false;
            return !(_closed && _count == 0);
        }
    }

    public bool IsClosed
    {
        get
        {
            lock (_gate)
            {
                return _closed;
            }
        }
    }

    /// <summary>The oldest entries, without taking them away.</summary>
    public int Peek(Span<WriteItem> into)
    {
        lock (_gate)
        {
            var count = Math.Min(_count, into.Length);
            for (var i = 0; i < count; i++)
            {
                into[i] = _ring[(_head + i) % capacity];
            }

            return count;
        }
    }

    /// <summary>Takes the oldest entries away: they are on disk, but for <paramref name="lost"/> that never will be.</summary>
    public void Drop(int count, int lost, bool moreAtOnce)
    {
        lock (_gate)
        {
            for (var i = 0; i < count; i++)
            {
                _ring[(_head + i) % capacity] = default;
            }

            _head = (_head + count) % capacity;
            _count -= count;
            _stored += count - lost;
            _accepted -= lost;
            _refused += lost;
            _hurry |= moreAtOnce;
        }
    }

    /// <summary>After a failed commit: lets go of the actions whose askers are told, keeps the order of the rest.</summary>
    public void GiveUp(StoreException trouble, bool everything)
    {
        lock (_gate)
        {
            var kept = 0;
            for (var i = 0; i < _count; i++)
            {
                var item = _ring[(_head + i) % capacity];
                item.Action?.Finish(trouble);
                if (!everything && item.Action is not { GiveUpOnTrouble: true })
                {
                    _ring[(_head + kept++) % capacity] = item;
                }
            }

            _accepted -= _count - kept;
            _refused += _count - kept;
            _count = kept;
        }
    }
}
